import { GapScan } from './gap-scan';
import type { Insertion } from './insertion';
import type { Neighbours } from './neighbours';
import { Route } from './route';
import type { WorkingPlan } from './working-plan';

/** Routes that are looked at: those of the nearest jobs. */
const MOST_ROUTES = 5;

/**
 * Puts a job on a route that is full by taking another stop out: the one whose leaving makes the route with
 * the job cheapest, what the stop then costs on no route counted. Putting jobs in one by one never finds
 * that, since before the stop is out the job fits nowhere.
 */
export class MakingRoom {
  private readonly scan: GapScan;
  /** A route of each shift to try things on. */
  private readonly drafts: (Route | undefined)[] = [];
  private readonly looked: number[] = [];

  constructor(
    private readonly plan: WorkingPlan,
    private readonly near: Neighbours,
    private readonly insertion: Insertion,
  ) {
    this.scan = new GapScan(plan.c);
  }

  /**
   * @param job on no route, or on one where it is worth less than elsewhere
   * @returns whether anything was changed; the caller keeps or undoes it
   */
  forJob(job: number): boolean {
    const { plan, scan, looked, insertion } = this;
    const { c } = plan;
    // Where a part is fetched first, taking stops out changes more than the route's order.
    if (c.isFrozen[job] || (c.hasShop && c.takesParts[job] === 1)) return false;
    const from = plan.routeOf[job]!;
    let bestRoute = -1;
    let bestStop = -1;
    let bestGap = -1;
    let best = Infinity;
    looked.length = 0;
    for (let k = 0; k < this.near.count && looked.length < MOST_ROUTES; k++) {
      const r = plan.routeOf[this.near.list[job * this.near.count + k]!]!;
      if (r < 0 || r === from || looked.includes(r)) continue;
      looked.push(r);
      const route = plan.routes[r]!;
      if (!c.mayServe[route.row + job] || route.shopAt >= 0) continue;
      const draft = (this.drafts[r] ??= new Route(c, route.from));
      for (let i = route.frozenCount; i < route.count; i++) {
        const out = route.stops[i]!;
        if (!this.hasPart(route, job, out)) continue;
        draft.replace(route.stops, route.count);
        draft.cut(i, 1);
        draft.refresh();
        const offset = draft.price - route.price + c.absentPrice[out]!;
        const isFound =
          draft.count === 0
            ? scan.empty(draft, job, offset, best)
            : scan.find(draft, job, draft.frozenCount, offset, best, -1);
        if (!isFound) continue;
        best = scan.price;
        bestRoute = r;
        bestStop = i;
        bestGap = scan.gap;
      }
    }
    if (bestRoute < 0) return false;
    if (from >= 0) this.takeOff(from, job);
    plan.touch(bestRoute);
    const out = plan.routes[bestRoute]!.stops[bestStop]!;
    plan.cutStop(bestRoute, bestStop);
    plan.putStop(bestRoute, bestGap, job);
    plan.settle(bestRoute);
    insertion.insert(out, this.near, false);
    return true;
  }

  private takeOff(r: number, job: number): void {
    const { plan } = this;
    plan.touch(r);
    const route = plan.routes[r]!;
    if (plan.c.hasShop) route.cutShop();
    let at = route.frozenCount;
    while (route.stops[at] !== job) at++;
    plan.cutStop(r, at);
    plan.settle(r);
  }

  /** Whether the van has the job's part once another stop is out. */
  private hasPart(route: Route, job: number, out: number): boolean {
    const { parts } = this.plan;
    parts.giveBack(route.from, out);
    const has = parts.hasFor(route.from.technician, job);
    parts.take(route.from, out);
    return has;
  }
}
