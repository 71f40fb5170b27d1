import type { CompiledProblem, ShiftStart } from './compiled-problem';
import { type Route } from './route';

/**
 * Which parts the visits of the plan under work take: from the van as long as it has any, and what then
 * lacks from the shop. Accepted stops are counted in `vanFree` already and fetch nothing.
 */
export class PartsInUse {
  /** Visits that take a part, shift (numbered as routes are) × partCount + part. */
  private readonly used: Int32Array;
  private readonly usedByTechnician: Int32Array;
  /** What all vans lack together, by part. */
  private readonly lacking: Int32Array;
  private readonly firstShiftOf: Int32Array;
  private readonly left: Int32Array;

  constructor(private readonly c: CompiledProblem) {
    this.used = new Int32Array(c.shifts.length * c.partCount);
    this.usedByTechnician = new Int32Array(c.technicianCount * c.partCount);
    this.lacking = new Int32Array(c.partCount);
    this.left = new Int32Array(c.partCount);
    this.firstShiftOf = new Int32Array(c.technicianCount);
    for (let s = c.shifts.length - 1; s >= 0; s--) this.firstShiftOf[c.shifts[s]!.technician] = s;
  }

  take(from: ShiftStart, job: number): void {
    this.change(from, job, 1);
  }

  giveBack(from: ShiftStart, job: number): void {
    this.change(from, job, -1);
  }

  /** Whether one more visit of this job is possible at all: each part on the van, or at the shop. */
  hasFor(technician: number, job: number): boolean {
    const { partCount, vanFree, shopParts, needOffset, needPart, needCount } = this.c;
    const end = needOffset[job + 1]!;
    for (let n = needOffset[job]!; n < end; n++) {
      const part = needPart[n]!;
      const slot = technician * partCount + part;
      const onVan = Math.max(0, vanFree[slot]! - this.usedByTechnician[slot]!);
      const lacks = needCount[n]! - onVan;
      if (lacks > 0 && this.lacking[part]! + lacks > shopParts[part]!) return false;
    }
    return true;
  }

  /** Whether one more visit of this job would take a part that the van lacks. */
  wouldLack(technician: number, job: number): boolean {
    const { partCount, vanFree, needOffset, needPart, needCount } = this.c;
    const end = needOffset[job + 1]!;
    for (let n = needOffset[job]!; n < end; n++) {
      const slot = technician * partCount + needPart[n]!;
      if (this.usedByTechnician[slot]! + needCount[n]! > vanFree[slot]!) return true;
    }
    return false;
  }

  /** Parts that visits may still take from a van. */
  leftOnVan(technician: number, part: number): number {
    const slot = technician * this.c.partCount + part;
    return Math.max(0, this.c.vanFree[slot]! - this.usedByTechnician[slot]!);
  }

  /** Parts left at the shop. */
  leftAtShop(part: number): number {
    return this.c.shopParts[part]! - this.lacking[part]!;
  }

  /** Whether the parts that a route's technician needs are on the van or at the shop. */
  areThere({ from }: Route): boolean {
    const { partCount, vanFree, shopParts } = this.c;
    for (let part = 0; part < partCount; part++) {
      const slot = from.technician * partCount + part;
      if (this.usedByTechnician[slot]! > vanFree[slot]! && this.lacking[part]! > shopParts[part]!) {
        return false;
      }
    }
    return true;
  }

  usesAny(from: ShiftStart): boolean {
    const base = this.shiftIndex(from) * this.c.partCount;
    for (let part = 0; part < this.c.partCount; part++)
      if (this.used[base + part]! > 0) return true;
    return false;
  }

  /** What is left of a part on the van when a shift begins. */
  leftBefore(from: ShiftStart, part: number): number {
    const { partCount, vanFree } = this.c;
    let left = vanFree[from.technician * partCount + part]!;
    const end = this.shiftIndex(from);
    for (let s = this.firstShiftOf[from.technician]!; s < end; s++) {
      left -= this.used[s * partCount + part]!;
    }
    return Math.max(0, left);
  }

  /** Parts that a route has to fetch, by part; null when it needs none. */
  fetchedBy({ from }: Route): Int32Array | null {
    const { partCount } = this.c;
    const base = this.shiftIndex(from) * partCount;
    let fetched: Int32Array | null = null;
    for (let part = 0; part < partCount; part++) {
      const short = this.used[base + part]! - this.leftBefore(from, part);
      if (short > 0) (fetched ??= new Int32Array(partCount))[part] = short;
    }
    return fetched;
  }

  /** Refreshes a route, with the stop at the shop where it costs least, if one is needed. */
  arrangeShop(route: Route): void {
    route.cutShop();
    if (!this.fetchedBy(route)) return route.refresh();
    const last = this.lastGapForShop(route);
    let best = -1;
    let bestPrice = Infinity;
    for (let gap = route.frozenCount; gap <= last; gap++) {
      route.put(gap, this.c.jobCount);
      route.refresh();
      if (route.isWithinLimit && route.price < bestPrice) {
        best = gap;
        bestPrice = route.price;
      }
      route.cut(gap, 1);
    }
    // Where none keeps to the limit the route is refused later; it still has to be one of its kind.
    route.put(best < 0 ? last : best, this.c.jobCount);
    route.refresh();
  }

  /** The latest gap of a route without a stop at the shop that has no lacking visit before it. */
  private lastGapForShop(route: Route): number {
    const { c, left } = this;
    for (let part = 0; part < c.partCount; part++) left[part] = this.leftBefore(route.from, part);
    for (let i = route.frozenCount; i < route.count; i++) {
      const job = route.stops[i]!;
      for (let n = c.needOffset[job]!; n < c.needOffset[job + 1]!; n++) {
        const part = c.needPart[n]!;
        left[part] = left[part]! - c.needCount[n]!;
        if (left[part] < 0) return i;
      }
    }
    return route.count;
  }

  private change(from: ShiftStart, job: number, by: 1 | -1): void {
    const { partCount, vanFree, needOffset, needPart, needCount } = this.c;
    const end = needOffset[job + 1]!;
    for (let n = needOffset[job]!; n < end; n++) {
      const part = needPart[n]!;
      const more = by * needCount[n]!;
      const slot = from.technician * partCount + part;
      const before = Math.max(0, this.usedByTechnician[slot]! - vanFree[slot]!);
      this.usedByTechnician[slot] = this.usedByTechnician[slot]! + more;
      const after = Math.max(0, this.usedByTechnician[slot] - vanFree[slot]!);
      this.lacking[part] = this.lacking[part]! + after - before;
      const own = this.shiftIndex(from) * partCount + part;
      this.used[own] = this.used[own]! + more;
    }
  }

  private shiftIndex(from: ShiftStart): number {
    return this.firstShiftOf[from.technician]! + from.shift;
  }
}
