import type { CompiledProblem } from './compiled-problem';
import type { SeededRandom } from './random';

/** Seconds that a drive to a job takes, for a first look at what a visit costs in time. */
const USUAL_DRIVE = 900;

/** Orders in which absent jobs are put back, and how often each is used. */
export class RecreateOrders {
  /** Most at stake for each minute first: also tells which jobs of the bank to call. */
  readonly byDensity: Float64Array;
  private readonly choices: (Float64Array | null)[] = [];

  constructor(c: CompiledProblem) {
    const byJob = (key: (job: number) => number): Float64Array =>
      Float64Array.from({ length: c.jobCount }, (_, job) => key(job));
    const service = (job: number): number => c.service[job] ?? 0;
    this.byDensity = byJob((job) => -c.absentPrice[job]! / (service(job) + USUAL_DRIVE));
    const far = byJob((job) => -meanDrive(c, job));
    const add = (times: number, order: Float64Array | null): void => {
      if (order && !differs(order)) return;
      for (let i = 0; i < times; i++) this.choices.push(order);
    };
    add(4, null);
    add(2, this.byDensity);
    add(
      2,
      byJob((job) => -c.absentPrice[job]!),
    );
    add(
      2,
      byJob((job) => firstDue(c, job)),
    );
    add(2, far);
    add(
      1,
      far.map((key) => -key),
    );
    add(
      1,
      byJob((job) => -service(job)),
    );
    add(
      1,
      byJob((job) => c.calledAt[job]!),
    );
    add(
      2,
      byJob((job) => windowStart(c, job)),
    );
    add(
      2,
      byJob((job) => Math.min(1e12, c.lastWindowEnd[job]! - windowStart(c, job))),
    );
  }

  arrange(jobs: number[], random: SeededRandom): void {
    const order = this.choices[random.below(this.choices.length)]!;
    if (order) sortByKey(jobs, order);
    else shuffle(jobs, random);
  }
}

function differs(order: Float64Array): boolean {
  return order.some((key) => key !== order[0]);
}

function meanDrive(c: CompiledProblem, job: number): number {
  let sum = 0;
  for (const { startLoc } of c.shifts) sum += c.travel[startLoc * c.locations + c.loc[job]!]!;
  return sum / Math.max(1, c.shifts.length);
}

function windowStart(c: CompiledProblem, job: number): number {
  const first = c.windowOffset[job]!;
  return first < c.windowOffset[job + 1]! ? c.windowFrom[first]! : -1e12;
}

/** The next thing that is lost: a value, or the last window. */
function firstDue(c: CompiledProblem, job: number): number {
  let due = Math.min(1e12, c.lastWindowEnd[job]!);
  for (let d = c.deadlineOffset[job]!; d < c.deadlineOffset[job + 1]!; d++) {
    const at = c.deadlineAt[d]!;
    if (at >= c.problem.now && at < due) due = at;
  }
  return due;
}

/** Insertion sort: the lists are short and nearly always small enough to stay in cache. */
function sortByKey(list: number[], key: Float64Array): void {
  for (let i = 1; i < list.length; i++) {
    const item = list[i]!;
    let j = i - 1;
    while (j >= 0 && key[list[j]!]! > key[item]!) {
      list[j + 1] = list[j]!;
      j--;
    }
    list[j + 1] = item;
  }
}

function shuffle(list: number[], random: SeededRandom): void {
  for (let i = list.length - 1; i > 0; i--) {
    const j = random.below(i + 1);
    const swapped = list[i]!;
    list[i] = list[j]!;
    list[j] = swapped;
  }
}
