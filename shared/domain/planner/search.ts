import type { CompiledProblem } from './compiled-problem';
import { nearestJobs } from './neighbours';
import type { SeededRandom } from './random';
import { Route, serviceStart, stopPrice } from './route';

/** Jobs taken out per round on average, and the longest string cut from one route: as published. */
const MEAN_REMOVED = 10;
const LONGEST_STRING = 10;
/** A position is passed over with this chance, so that the same hole is not refilled the same way. */
const BLINK_BELOW = Math.floor(0.01 * 2 ** 32);
const NEIGHBOURS = 32;
/** Up to so many jobs every position is tried; beyond, those beside a near job, and all now and then. */
const FULL_SCAN_JOBS = 150;
const FULL_SCAN_EVERY = 12;
const BANK_PER_ROUND = 8;

/**
 * Ruin and recreate with simulated annealing: take strings of stops out of neighbouring routes, put
 * the absent jobs back greedily, keep the result if it is better or, by chance, not much worse.
 * After Christiaens & Vanden Berghe, "Slack Induction by String Removals for Vehicle Routing
 * Problems", Transportation Science 54(2), 2020; with an exchange of route tails, and with leaving
 * a job out as a choice that has a price.
 */
export class Search {
  readonly routes: readonly Route[];
  /** Price of the plan under work. */
  price = 0;
  bestPrice = Infinity;
  private bestStops: Int32Array[] = [];

  private readonly routeOf: Int32Array;
  private readonly gapOf: Int32Array;
  /** Jobs on no route, in any order, and where each job stands in that list. */
  private readonly bank: Int32Array;
  private readonly bankIndex: Int32Array;
  private bankCount = 0;
  private readonly stock: Int32Array;
  private readonly neighbours: Int32Array;
  private readonly neighbourCount: number;
  private readonly movable: Int32Array;
  private readonly orders: readonly Float64Array[];

  // Journal of the round: routes as they were, and where each moved job was.
  private readonly touched: number[] = [];
  private readonly isTouched: Uint8Array;
  private readonly savedStops: Int32Array[];
  private readonly savedCount: Int32Array;
  private readonly absent: number[] = [];
  private readonly isAbsent: Uint8Array;

  // The best place found by the last look for one.
  private foundRoute = -1;
  private foundGap = -1;
  private foundPrice = Infinity;

  constructor(
    private readonly c: CompiledProblem,
    private readonly random: SeededRandom,
  ) {
    this.routes = c.shifts.map((shift) => new Route(c, shift));
    this.routeOf = new Int32Array(c.jobCount).fill(-1);
    this.gapOf = new Int32Array(c.jobCount);
    this.bank = new Int32Array(c.jobCount);
    this.bankIndex = new Int32Array(c.jobCount).fill(-1);
    this.stock = c.stock.slice();
    this.neighbourCount = Math.min(NEIGHBOURS, Math.max(0, c.jobCount - 1));
    this.neighbours = nearestJobs(c, this.neighbourCount);
    this.isTouched = new Uint8Array(this.routes.length);
    this.savedStops = this.routes.map(() => new Int32Array(16));
    this.savedCount = new Int32Array(this.routes.length);
    this.isAbsent = new Uint8Array(c.jobCount);
    this.movable = Int32Array.from(
      Array.from({ length: c.jobCount }, (_, job) => job).filter((job) => !c.isFrozen[job]),
    );
    this.orders = recreateOrders(c);
    for (const job of this.movable) this.addToBank(job);
    this.routes.forEach((route, index) => {
      for (const job of route.from.frozen) this.takePart(index, job);
      this.noteStops(index);
    });
    this.sumPrice();
    this.keepIfBest();
  }

  /** Takes over stops in their order, leaving out what does not fit. */
  takeOver(routeIndex: number, jobs: readonly number[]): void {
    const route = this.routes[routeIndex]!;
    for (const job of jobs) {
      if (this.bankIndex[job]! < 0 || !this.fits(routeIndex, job)) continue;
      route.put(route.count, job);
      route.refresh();
      if (route.isWithinLimit) {
        this.takePart(routeIndex, job);
        this.removeFromBank(job);
        this.routeOf[job] = routeIndex;
      } else {
        route.cut(route.count - 1, 1);
        route.refresh();
      }
    }
    this.noteStops(routeIndex);
    this.sumPrice();
    this.keepIfBest();
  }

  /** Puts jobs from the bank where they cost least, those with most at stake per minute first. */
  fillFromBank(): void {
    const density = this.orders[1]!;
    const waiting = Array.from(this.bank.subarray(0, this.bankCount));
    waiting.sort((a, b) => density[a]! - density[b]! || a - b);
    for (const job of waiting) this.insertCheapest(job, true, false);
    this.sumPrice();
    this.clearJournal();
    this.keepIfBest();
  }

  /** One round. @param temperature how much worse a result may be and still be kept, in money */
  step(temperature: number): void {
    if (this.movable.length === 0 || this.routes.length === 0) return;
    const before = this.price;
    const exchanged = this.random.below(10) === 0 && this.exchangeTails();
    if (!exchanged) {
      this.ruin();
      this.recreate();
    }
    const worse = this.price - before;
    if (worse > 0 && worse >= -temperature * Math.log(this.random.unit() + 1e-12)) {
      this.undo(before);
    } else {
      this.clearJournal();
      if (this.price < this.bestPrice - 1e-7) this.keepIfBest();
    }
  }

  /** Makes the best plan found the plan under work. */
  restoreBest(): void {
    for (let r = 0; r < this.routes.length; r++) {
      for (let i = this.routes[r]!.frozenCount; i < this.routes[r]!.count; i++) {
        const job = this.routes[r]!.stops[i]!;
        this.givePartBack(r, job);
        this.addToBank(job);
      }
    }
    this.bestStops.forEach((stops, r) => {
      this.routes[r]!.replace(stops, stops.length);
      this.routes[r]!.refresh();
      for (const job of stops.subarray(this.routes[r]!.frozenCount)) {
        this.takePart(r, job);
        this.removeFromBank(job);
      }
      this.noteStops(r);
    });
    this.sumPrice();
  }

  /** Parts left on a technician's van under the plan under work. */
  partsLeft(technician: number, part: number): number {
    return this.stock[technician * this.c.partCount + part]!;
  }

  private sumPrice(): void {
    let price = 0;
    for (const route of this.routes) price += route.price;
    for (let i = 0; i < this.bankCount; i++) price += this.c.absentPrice[this.bank[i]!]!;
    this.price = price;
  }

  private keepIfBest(): void {
    if (this.price >= this.bestPrice) return;
    this.bestPrice = this.price;
    this.bestStops = this.routes.map((route) => route.stops.slice(0, route.count));
  }

  // ---- ruin

  private ruin(): void {
    const { random } = this;
    const seed = this.movable[random.below(this.movable.length)]!;
    let routed = 0;
    let used = 0;
    for (const route of this.routes) {
      if (route.count > route.frozenCount) used++;
      routed += route.count - route.frozenCount;
    }
    const meanStops = used > 0 ? routed / used : 0;
    const longest = Math.max(1, Math.min(LONGEST_STRING, meanStops));
    const mostStrings = Math.max(1, (4 * MEAN_REMOVED) / (1 + longest) - 1);
    const strings = Math.floor(1 + random.unit() * mostStrings);
    const wholeRoute = random.below(50) === 0;

    this.absent.length = 0;
    let cut = 0;
    for (let k = -1; k < this.neighbourCount && cut < strings; k++) {
      const job = k < 0 ? seed : this.neighbours[seed * this.neighbourCount + k]!;
      const route = this.routeOf[job]!;
      if (route >= 0 && !this.isTouched[route] && !this.c.isFrozen[job]) {
        this.cutString(route, this.gapOf[job]!, wholeRoute ? 40 : longest);
        cut++;
        if (wholeRoute) break;
      }
    }
    this.callFromBank(seed);
  }

  /** Cuts a string of stops around the one at `at`; half of the time some inner stops stay. */
  private cutString(routeIndex: number, at: number, longest: number): void {
    const { random } = this;
    const route = this.routes[routeIndex]!;
    this.touch(routeIndex);
    const movable = route.count - route.frozenCount;
    const length = Math.floor(1 + random.unit() * Math.min(movable, longest));
    const cutLength = Math.min(length, movable);
    let stay = 0;
    if (cutLength > 1 && cutLength < movable && random.below(2) === 0) {
      stay = 1;
      while (cutLength + stay < movable && random.unit() > 0.5) stay++;
    }
    const span = cutLength + stay;
    const firstMin = Math.max(route.frozenCount, at - span + 1);
    const firstMax = Math.min(at, route.count - span);
    const first = firstMin + random.below(firstMax - firstMin + 1);
    const stayFrom = stay > 0 ? first + 1 + random.below(cutLength - 1) : first + span;
    for (let i = first + span - 1; i >= first; i--) {
      if (i >= stayFrom && i < stayFrom + stay) continue;
      const job = route.stops[i]!;
      route.cut(i, 1);
      this.givePartBack(routeIndex, job);
      this.addToBank(job);
      this.callIn(job);
    }
    this.refresh(routeIndex);
  }

  /** Lets some jobs of the bank take part: near ones, and those with most at stake per minute. */
  private callFromBank(seed: number): void {
    const { random } = this;
    if (this.routeOf[seed]! < 0) this.callIn(seed);
    let called = 0;
    for (let k = 0; k < this.neighbourCount && called < BANK_PER_ROUND / 2; k++) {
      const job = this.neighbours[seed * this.neighbourCount + k]!;
      if (this.bankIndex[job]! >= 0 && !this.isAbsent[job]) {
        this.callIn(job);
        called++;
      }
    }
    const density = this.orders[1]!;
    for (; called < BANK_PER_ROUND && this.bankCount > 0; called++) {
      const one = this.bank[random.below(this.bankCount)]!;
      const other = this.bank[random.below(this.bankCount)]!;
      this.callIn(density[one]! < density[other]! ? one : other);
    }
  }

  private callIn(job: number): void {
    if (this.isAbsent[job]) return;
    this.isAbsent[job] = 1;
    this.absent.push(job);
  }

  // ---- recreate

  private recreate(): void {
    const { absent, random } = this;
    const pick = random.below(RECREATE_CHOICES.length);
    const order = RECREATE_CHOICES[pick]!;
    if (order < 0) shuffle(absent, random);
    else sortByKey(absent, this.orders[order]!);
    const full = this.c.jobCount <= FULL_SCAN_JOBS || random.below(FULL_SCAN_EVERY) === 0;
    for (const job of absent) {
      this.isAbsent[job] = 0;
      this.insertCheapest(job, full, true);
    }
    this.sumPrice();
  }

  private insertCheapest(job: number, everywhere: boolean, blinks: boolean): void {
    this.foundRoute = -1;
    this.foundPrice = this.c.absentPrice[job]!;
    if (everywhere) {
      for (let r = 0; r < this.routes.length; r++) {
        if (!this.fits(r, job)) continue;
        const route = this.routes[r]!;
        for (let gap = route.frozenCount; gap <= route.count; gap++) {
          if (!blinks || this.random.uint32() >= BLINK_BELOW) this.tryGap(r, gap, job);
        }
      }
    } else {
      this.tryNearGaps(job);
    }
    if (this.foundRoute < 0) return;
    const r = this.foundRoute;
    this.touch(r);
    this.routes[r]!.put(this.foundGap, job);
    this.takePart(r, job);
    this.removeFromBank(job);
    this.refresh(r);
  }

  /** Tries the gaps on both sides of near jobs, and the first and last gap of every route. */
  private tryNearGaps(job: number): void {
    const base = job * this.neighbourCount;
    for (let k = 0; k < this.neighbourCount; k++) {
      const near = this.neighbours[base + k]!;
      const r = this.routeOf[near]!;
      if (r < 0 || !this.fits(r, job)) continue;
      const gap = this.gapOf[near]!;
      if (this.random.uint32() < BLINK_BELOW) continue;
      if (gap >= this.routes[r]!.frozenCount) this.tryGap(r, gap, job);
      this.tryGap(r, gap + 1, job);
    }
    for (let r = 0; r < this.routes.length; r++) {
      const route = this.routes[r]!;
      if (!this.fits(r, job)) continue;
      this.tryGap(r, route.frozenCount, job);
      if (route.count > route.frozenCount) this.tryGap(r, route.count, job);
    }
  }

  private tryGap(routeIndex: number, gap: number, job: number): void {
    const { c } = this;
    const route = this.routes[routeIndex]!;
    if (gap < route.frozenCount) return;
    const row = c.loc[job]! * c.locations;
    const there = c.travelTo[row + route.place[gap]!]!;
    const onward = c.travel[row + route.place[gap + 1]!]!;
    const ready = route.ready[gap]!;
    const isEmpty = route.count === 0;
    const direct = isEmpty ? 0 : route.arrive[gap]! - ready;
    let price = (there + onward - direct) * c.travelPrice;
    // Most gaps end here: driving and waiting alone cost more than the best place so far.
    const leastWait = c.waitPrice[job]! * (ready + there - c.calledAt[job]!);
    if (price + leastWait >= this.foundPrice) return;
    const start = serviceStart(c, job, ready + there);
    price += stopPrice(c, job, start) + route.changePrice(job);
    if (price >= this.foundPrice) return;
    const next = start + c.service[job]! + onward;
    if (isEmpty) {
      if (next > route.from.limit) return;
      price += Math.max(0, next - route.from.shiftEnd) * c.overtimePrice;
    } else {
      const slip = next - route.arrive[gap]!;
      if (slip > route.hard[gap]!) return;
      if (slip >= 0 && slip <= route.slack[gap]!) price += slip * route.slope[gap]!;
      else if (slip > 0 && price + slip * route.slope[gap]! >= this.foundPrice) return;
      else price += route.slipPrice(gap, slip, this.foundPrice - price);
    }
    if (price < this.foundPrice) {
      this.foundPrice = price;
      this.foundRoute = routeIndex;
      this.foundGap = gap;
    }
  }

  // ---- exchange of tails

  /** Lets two neighbouring routes swap what follows a job and what begins with a near one. */
  private exchangeTails(): boolean {
    const { random, c } = this;
    if (this.neighbourCount === 0) return false;
    const job = this.movable[random.below(this.movable.length)]!;
    const near =
      this.neighbours[job * this.neighbourCount + random.below(Math.min(12, this.neighbourCount))]!;
    const a = this.routeOf[job]!;
    const b = this.routeOf[near]!;
    if (a < 0 || b < 0 || a === b || c.isFrozen[near]) return false;
    const routeA = this.routes[a]!;
    const routeB = this.routes[b]!;
    const gapA = this.gapOf[job]! + 1;
    const gapB = this.gapOf[near]!;
    const tailA = Array.from(routeA.stops.subarray(gapA, routeA.count));
    const tailB = Array.from(routeB.stops.subarray(gapB, routeB.count));
    const technicianA = routeA.from.technician;
    const technicianB = routeB.from.technician;
    if (tailA.some((moved) => !c.mayServe[technicianB * c.jobCount + moved])) return false;
    if (tailB.some((moved) => !c.mayServe[technicianA * c.jobCount + moved])) return false;

    const before = this.price;
    const priceBefore = routeA.price + routeB.price;
    this.touch(a);
    this.touch(b);
    routeA.cut(gapA, tailA.length);
    routeB.cut(gapB, tailB.length);
    tailB.forEach((moved) => routeA.put(routeA.count, moved));
    tailA.forEach((moved) => routeB.put(routeB.count, moved));
    for (const moved of tailA) this.givePartBack(a, moved);
    for (const moved of tailB) this.givePartBack(b, moved);
    for (const moved of tailB) this.takePart(a, moved);
    for (const moved of tailA) this.takePart(b, moved);
    this.refresh(a);
    this.refresh(b);
    this.price += routeA.price + routeB.price - priceBefore;
    const fitsParts =
      tailB.every((moved) => this.hasPartsFor(a, moved)) &&
      tailA.every((moved) => this.hasPartsFor(b, moved));
    if (routeA.isWithinLimit && routeB.isWithinLimit && fitsParts) return true;
    this.undo(before);
    return false;
  }

  private hasPartsFor(routeIndex: number, job: number): boolean {
    const part = this.c.part[job]!;
    return part < 0 || this.partsLeft(this.routes[routeIndex]!.from.technician, part) >= 0;
  }

  // ---- bookkeeping

  private fits(routeIndex: number, job: number): boolean {
    const { c } = this;
    const technician = this.routes[routeIndex]!.from.technician;
    if (!c.mayServe[technician * c.jobCount + job]) return false;
    const part = c.part[job]!;
    return part < 0 || this.stock[technician * c.partCount + part]! > 0;
  }

  private takePart(routeIndex: number, job: number): void {
    this.changeStock(routeIndex, job, -1);
  }

  private givePartBack(routeIndex: number, job: number): void {
    this.changeStock(routeIndex, job, 1);
  }

  private changeStock(routeIndex: number, job: number, by: number): void {
    const part = this.c.part[job]!;
    if (part < 0) return;
    const slot = this.routes[routeIndex]!.from.technician * this.c.partCount + part;
    this.stock[slot] = this.stock[slot]! + by;
  }

  private addToBank(job: number): void {
    this.routeOf[job] = -1;
    this.bankIndex[job] = this.bankCount;
    this.bank[this.bankCount++] = job;
  }

  private removeFromBank(job: number): void {
    const index = this.bankIndex[job]!;
    const last = this.bank[--this.bankCount]!;
    this.bank[index] = last;
    this.bankIndex[last] = index;
    this.bankIndex[job] = -1;
  }

  private refresh(routeIndex: number): void {
    this.routes[routeIndex]!.refresh();
    this.noteStops(routeIndex);
  }

  private noteStops(routeIndex: number): void {
    const route = this.routes[routeIndex]!;
    for (let i = 0; i < route.count; i++) {
      this.routeOf[route.stops[i]!] = routeIndex;
      this.gapOf[route.stops[i]!] = i;
    }
  }

  private touch(routeIndex: number): void {
    if (this.isTouched[routeIndex]) return;
    this.isTouched[routeIndex] = 1;
    this.touched.push(routeIndex);
    const route = this.routes[routeIndex]!;
    if (this.savedStops[routeIndex]!.length < route.count) {
      this.savedStops[routeIndex] = new Int32Array(route.count * 2);
    }
    this.savedStops[routeIndex]!.set(route.stops.subarray(0, route.count));
    this.savedCount[routeIndex] = route.count;
  }

  /** Puts the touched routes back as they were; nothing else has changed. */
  private undo(price: number): void {
    for (const r of this.touched) {
      const route = this.routes[r]!;
      for (let i = route.frozenCount; i < route.count; i++) {
        this.givePartBack(r, route.stops[i]!);
        this.addToBank(route.stops[i]!);
      }
    }
    for (const r of this.touched) {
      const route = this.routes[r]!;
      route.replace(this.savedStops[r]!, this.savedCount[r]!);
      for (let i = route.frozenCount; i < route.count; i++) {
        this.takePart(r, route.stops[i]!);
        this.removeFromBank(route.stops[i]!);
      }
      this.refresh(r);
    }
    this.clearJournal();
    this.price = price;
  }

  private clearJournal(): void {
    for (const r of this.touched) this.isTouched[r] = 0;
    this.touched.length = 0;
  }
}

/** Chances of the orders in which absent jobs are put back; -1 is a random order. */
const RECREATE_CHOICES = [-1, -1, -1, -1, 0, 0, 1, 1, 1, 2, 2, 3, 4];

/** Keys by which absent jobs are put back, the smallest first. */
function recreateOrders(c: CompiledProblem): readonly Float64Array[] {
  const jobs = Array.from({ length: c.jobCount }, (_, job) => job);
  const firstDue = jobs.map((job) => {
    const now = c.problem.now;
    const dues = [c.lastWindowEnd[job]!];
    for (let d = c.deadlineOffset[job]!; d < c.deadlineOffset[job + 1]!; d++) {
      if (c.deadlineAt[d]! >= now) dues.push(c.deadlineAt[d]!);
    }
    return Math.min(...dues);
  });
  return [
    Float64Array.from(jobs, (job) => -c.absentPrice[job]!),
    Float64Array.from(jobs, (job) => -c.absentPrice[job]! / (c.service[job]! + 900)),
    Float64Array.from(firstDue),
    Float64Array.from(jobs, (job) => c.service[job]!),
    Float64Array.from(jobs, (job) => c.calledAt[job]!),
  ];
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
