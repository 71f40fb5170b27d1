import type { CompiledProblem } from './compiled-problem';
import type { Route } from './route';

/** Shifts by kinds: those of one kind are alike to every job, so one that is empty stands for all. */
export class AlikeShifts {
  private readonly kinds: readonly (readonly number[])[];
  /** The shift of each kind that was empty when last asked for. */
  private readonly known: Int32Array;

  constructor(c: CompiledProblem) {
    this.kinds = kindsOf(c);
    this.known = Int32Array.from(this.kinds, ([first]) => first!);
  }

  get count(): number {
    return this.kinds.length;
  }

  /** A route of the kind that has no stop, or -1. */
  emptyOne(kind: number, routes: readonly Route[]): number {
    const known = this.known[kind]!;
    if (routes[known]!.count === 0) return known;
    for (const r of this.kinds[kind]!) {
      if (routes[r]!.count > 0) continue;
      this.known[kind] = r;
      return r;
    }
    return -1;
  }
}

function kindsOf(c: CompiledProblem): number[][] {
  const { jobs, technicians } = c.problem;
  // Whoever a job or a promise names is one of a kind.
  const named = new Set<string>(
    jobs.flatMap(({ onlyTechnicians, serviceBy }) => [
      ...(onlyTechnicians ?? []),
      ...Object.keys(serviceBy ?? {}),
    ]),
  );
  for (const technician of c.promised)
    if (technicians[technician]) named.add(technicians[technician].id);
  const kinds = new Map<string, number[]>();
  c.shifts.forEach((from, r) => {
    const { id, skills, parts } = technicians[from.technician]!;
    const { startLoc, startAt, endLoc, shiftEnd, breaks, frozen } = from;
    const name = named.has(id) ? id : '';
    const key = [name, startLoc, startAt, endLoc, shiftEnd, breaks, frozen, skills, parts];
    const words = JSON.stringify(key);
    const kind = kinds.get(words);
    if (kind) kind.push(r);
    else kinds.set(words, [r]);
  });
  return [...kinds.values()];
}
