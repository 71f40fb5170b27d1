import type { PlanJob, PlanProblem, PlanRoute, PlanTechnician } from './problem';

/** Every part that a visit takes, as the checker reads `part` and `parts`. */
export const needsOf = (job: PlanJob | undefined): readonly string[] =>
  job?.parts ?? (job?.part === undefined ? [] : [job.part]);

/** What is left on the vans and in the shop, while a plan's routes are gone through in their order. */
export class VanStock {
  private readonly vans: ReadonlyMap<string, Map<string, number>>;
  private readonly fetched = new Map<string, number>();

  constructor(private readonly problem: PlanProblem) {
    this.vans = new Map(
      problem.technicians.map(({ id, parts }) => [id, new Map(Object.entries(parts))]),
    );
  }

  left(technician: string, part: string): number {
    return this.vans.get(technician)?.get(part) ?? 0;
  }

  /** Takes one from the van; false when there is none, and then nothing changes. */
  take(technician: string, part: string): boolean {
    const left = this.left(technician, part);
    if (left < 1) return false;
    this.vans.get(technician)?.set(part, left - 1);
    return true;
  }

  /** What a route has to fetch: what its visits need from the first on that is not accepted, and its van lacks. */
  lacking(
    route: PlanRoute,
    person: PlanTechnician,
    jobs: ReadonlyMap<string, PlanJob>,
  ): ReadonlyMap<string, number> {
    const left = new Map<string, number>();
    const lacking = new Map<string, number>();
    const held = route.shift === 0 ? person.frozen.length : 0;
    route.stops.forEach(({ job }, position) => {
      for (const part of needsOf(jobs.get(job))) {
        const onVan = left.get(part) ?? this.left(person.id, part);
        left.set(part, Math.max(0, onVan - 1));
        // An accepted visit is kept without its part too, so nobody drives to the shop for it.
        if (onVan < 1 && position >= held) lacking.set(part, (lacking.get(part) ?? 0) + 1);
      }
    });
    return lacking;
  }

  /** Loads parts at the shop. @returns in words, what the shop cannot give */
  fetch(technician: string, parts: ReadonlyMap<string, number>): string[] {
    const refused: string[] = [];
    const shop = this.problem.shop;
    for (const [part, count] of parts) {
      const so = (this.fetched.get(part) ?? 0) + count;
      this.fetched.set(part, so);
      const van = this.vans.get(technician);
      van?.set(part, this.left(technician, part) + count);
      if (shop?.parts && so > (shop.parts[part] ?? 0)) {
        refused.push(`The shop has no ${part} left for ${technician}.`);
      }
    }
    return refused;
  }
}
