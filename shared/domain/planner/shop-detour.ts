import type { GapScan } from './gap-scan';
import { Route } from './route';
import type { WorkingPlan } from './working-plan';

/**
 * Prices a job whose part the van lacks: every gap for the stop at the shop, and with each every gap for
 * the job. Such routes are few and short.
 */
export class ShopDetour {
  /** A route of each shift to try things on. */
  private readonly drafts: (Route | undefined)[] = [];

  constructor(
    private readonly plan: WorkingPlan,
    private readonly scan: GapScan,
  ) {}

  /** Whether the job fits for less than `below`; the place is then in the scan. */
  find(r: number, route: Route, job: number, below: number): boolean {
    const { scan } = this;
    const { c } = this.plan;
    if (this.mayPrecede(route, job, route.count)) {
      // This route has them on the van still; a later shift of the technician is who lacks it then.
      const later = this.laterPrice(r, route, job);
      if (later === Infinity) return false;
      if (route.count === 0) return scan.empty(route, job, later, below);
      return scan.find(route, job, route.frozenCount, later, below, -1);
    }
    const draft = this.draftOf(r, route);
    draft.cutShop();
    const { count } = draft;
    let bestGap = -1;
    let best = below;
    for (let gap = route.frozenCount; gap <= count; gap++) {
      if (gap > route.frozenCount && this.lacksBefore(draft, gap)) break;
      draft.put(gap, c.jobCount);
      draft.refresh();
      const first = this.mayPrecede(draft, job, gap) ? draft.frozenCount : gap + 1;
      if (scan.find(draft, job, first, draft.price - route.price, best, -1)) {
        bestGap = scan.gap;
        best = scan.price;
      }
      draft.cut(gap, 1);
    }
    scan.gap = bestGap;
    scan.price = best;
    return bestGap >= 0;
  }

  /** How many of a part the free visits among the first `until` stops take. */
  private usesOf(route: Route, part: number, until: number): number {
    const { needOffset, needPart, needCount } = this.plan.c;
    let uses = 0;
    for (let i = route.frozenCount; i < until; i++) {
      const job = route.stops[i]!;
      const end = needOffset[job + 1]!;
      for (let n = needOffset[job]!; n < end; n++) if (needPart[n] === part) uses += needCount[n]!;
    }
    return uses;
  }

  /** Whether the van has what a job takes after the free visits among the first `until` stops. */
  private mayPrecede(route: Route, job: number, until: number): boolean {
    const { needOffset, needPart, needCount } = this.plan.c;
    for (let n = needOffset[job]!; n < needOffset[job + 1]!; n++) {
      const part = needPart[n]!;
      const left = this.plan.parts.leftBefore(route.from, part);
      if (this.usesOf(route, part, until) + needCount[n]! > left) return false;
    }
    return true;
  }

  /** Whether the last stop before a gap lacks a part. */
  private lacksBefore(route: Route, gap: number): boolean {
    const { needOffset, needPart } = this.plan.c;
    const job = route.stops[gap - 1]!;
    for (let n = needOffset[job]!; n < needOffset[job + 1]!; n++) {
      const part = needPart[n]!;
      if (this.usesOf(route, part, gap) > this.plan.parts.leftBefore(route.from, part)) return true;
    }
    return false;
  }

  /** What the later shifts of the technician cost more when this route takes one part more. */
  private laterPrice(r: number, route: Route, job: number): number {
    const { routes, parts } = this.plan;
    let price = 0;
    parts.take(route.from, job);
    for (let later = r + 1; later < routes.length && price < Infinity; later++) {
      const other = routes[later]!;
      if (other.from.technician !== route.from.technician) break;
      if (!parts.usesAny(other.from)) continue;
      const draft = this.draftOf(later, other);
      parts.arrangeShop(draft);
      price += draft.isWithinLimit ? draft.price - other.price : Infinity;
    }
    parts.giveBack(route.from, job);
    return price;
  }

  private draftOf(r: number, route: Route): Route {
    const draft = (this.drafts[r] ??= new Route(this.plan.c, route.from));
    draft.replace(route.stops, route.count);
    return draft;
  }
}
