import type { CompiledProblem, ShiftStart } from './compiled-problem';
import { counted, partsOf } from './job-parts';
import { NO_WAY_SECONDS, type UnassignedJob } from './problem';
import { Route } from './route';
import type { WorkingPlan } from './working-plan';

type Reason = Pick<UnassignedJob, 'reason' | 'because'>;

/** Why jobs are on no route, the hardest reason first. */
export class UnassignedReasons {
  private readonly c: CompiledProblem;
  /** A route of each shift with nothing but its accepted stops. */
  private readonly drafts: (Route | undefined)[] = [];
  private readonly technicians: readonly number[];

  constructor(private readonly plan: WorkingPlan) {
    this.c = plan.c;
    this.technicians = Array.from({ length: this.c.technicianCount }, (_, index) => index);
  }

  of(job: number): Reason {
    const { c } = this;
    const skilled = this.technicians.filter((t) => c.mayServe[t * c.rowLength + job]);
    if (skilled.length === 0) return noSkill(job, c);

    const withPart = skilled.filter((t) => this.couldHavePart(t, job));
    const name = [...counted(partsOf(c.problem.jobs[job]!))]
      .map(([part, count]) => (count > 1 ? `${part} (${count})` : part))
      .join(' and ');
    if (withPart.length === 0) {
      const shop = c.hasShop ? ', nor has the shop any' : '';
      return { reason: 'part', because: `No van of those who may go carries: ${name}${shop}.` };
    }
    const mayGo = new Set(withPart);
    const shifts = c.shifts.filter((shift) => mayGo.has(shift.technician));
    if (shifts.length > 0 && !shifts.some((shift) => canDriveTo(job, shift, c))) {
      return {
        reason: 'unreachable',
        because: 'No open road leads there and back for those who may go.',
      };
    }
    if (!c.shifts.some((shift, s) => mayGo.has(shift.technician) && this.hasTime(job, shift, s))) {
      return {
        reason: 'no_shift',
        because: 'No shift of those who may go is long enough for this visit.',
      };
    }
    if (!withPart.some((t) => this.plan.parts.hasFor(t, job))) {
      return { reason: 'part', because: `Other visits take the last on the vans of: ${name}.` };
    }
    return { reason: 'capacity', because: 'The time goes to visits that save more.' };
  }

  private couldHavePart(technician: number, job: number): boolean {
    const { needOffset, needPart, needCount, stock, partCount, shopParts } = this.c;
    for (let n = needOffset[job]!; n < needOffset[job + 1]!; n++) {
      const part = needPart[n]!;
      if (stock[technician * partCount + part]! + shopParts[part]! < needCount[n]!) return false;
    }
    return true;
  }

  /** Whether the van lacks a part though only the accepted stops have taken theirs. */
  private lacksAny(job: number, { technician }: ShiftStart): boolean {
    const { needOffset, needPart, needCount, vanFree, partCount } = this.c;
    for (let n = needOffset[job]!; n < needOffset[job + 1]!; n++) {
      if (vanFree[technician * partCount + needPart[n]!]! < needCount[n]!) return true;
    }
    return false;
  }

  /** Whether the shift could hold this visit if it held nothing but its accepted stops. */
  private hasTime(job: number, shift: ShiftStart, s: number): boolean {
    const { c } = this;
    const draft = (this.drafts[s] ??= new Route(c, shift));
    const isFetched = this.lacksAny(job, shift);
    const last = draft.frozenCount;
    draft.replace(shift.frozen, last);
    if (isFetched && c.hasShop) draft.put(last, c.jobCount);
    draft.put(draft.count, job);
    draft.refresh();
    return draft.isWithinLimit;
  }
}

function noSkill(job: number, c: CompiledProblem): Reason {
  const { skills, onlyTechnicians } = c.problem.jobs[job]!;
  const needed = skills.length > 0 ? `the skill: ${skills.join(', ')}` : 'leave to go';
  return onlyTechnicians
    ? { reason: 'skill', because: `None of the technicians it is limited to has ${needed}.` }
    : { reason: 'skill', because: `No technician has ${needed}.` };
}

/** Whether roads lead from where the shift begins to the job, and on to where it ends. */
function canDriveTo(job: number, { startLoc, endLoc }: ShiftStart, c: CompiledProblem): boolean {
  const place = c.loc[job]!;
  return (
    c.travel[startLoc * c.locations + place]! < NO_WAY_SECONDS &&
    c.travel[place * c.locations + endLoc]! < NO_WAY_SECONDS
  );
}
