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
    const { c, parts } = this.plan;
    const part = c.part[job]!;
    const left = parts.leftBefore(route.from, part);
    if (this.usesOf(route, part, route.count) < left) {
      // This route has one on the van still; a later shift of the technician is who lacks it then.
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
      const mayPrecede = this.usesOf(draft, part, gap) < left;
      const first = mayPrecede ? draft.frozenCount : gap + 1;
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

  /** Free visits among the first `until` stops that take a part. */
  private usesOf(route: Route, part: number, until: number): number {
    let uses = 0;
    for (let i = route.frozenCount; i < until; i++) {
      if (this.plan.c.part[route.stops[i]!] === part) uses++;
    }
    return uses;
  }

  /** Whether the last stop before a gap lacks its part. */
  private lacksBefore(route: Route, gap: number): boolean {
    const part = this.plan.c.part[route.stops[gap - 1]!]!;
    if (part < 0) return false;
    return this.usesOf(route, part, gap) > this.plan.parts.leftBefore(route.from, part);
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
