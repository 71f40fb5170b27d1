import { Refused } from './person-at-work';

/** What the drill has done so far. */
export class DrillTally {
  taken = 0;
  settledByPhone = 0;
  needVisits = 0;
  calledOff = 0;
  accepted = 0;
  visits = 0;
  plansPublished = 0;
  announcements = 0;
  /** Refusals because something had moved on; they happen to people too. */
  overtaken = 0;
  readonly faults: string[] = [];

  /** Runs a step. What was overtaken is counted, and everything else is a fault. @returns null then */
  async step<Result>(work: () => Promise<Result>): Promise<Result | null> {
    try {
      return await work();
    } catch (error) {
      if (error instanceof Refused && error.isOvertaken) this.overtaken++;
      else this.faults.push(error instanceof Error ? error.message : String(error));
      return null;
    }
  }
}
