import type { Instant } from '../instant';
import { EventHeap } from './event-heap';
import type { ForecastCall } from './facts';
import { RUNS_AGAIN, TO_VISIT } from './fates';
import { LULL_MS, type Crew, type Played, type Span } from './played';
import { Roster } from './roster';
import { WaitingLine } from './waiting-line';
import type { World } from './world';

const PHONE_ENDS = 0;
const IS_FREE = 1;
const COMES_BACK = 2;
const ENDS_ITSELF = 3;
const KINDS = 4;

const LATER = 0;
const ON_PHONE = 1;
const WAITING = 2;
const WITH_SOMEBODY = 3;
const PARKED = 4;
const SETTLED = 5;

/** A visit that lacks its part still takes this share of the time: our estimate. */
const DIAGNOSIS = 0.6;
/** The last visit of a shift is chosen among the near ones: it takes this share of a usual one. Our estimate. */
const LAST_VISIT = 0.75;

/** Plays one future with one crew, event by event, until nothing is open or the span is over. */
export function play(calls: readonly ForecastCall[], world: World, crew: Crew, span: Span): Played {
  return new Run(calls, world, crew, span).result();
}

class Run {
  private readonly heap = new EventHeap();
  private readonly line: WaitingLine;
  private readonly roster: Roster;
  private readonly state: Uint8Array;
  /** Parts and access are a matter of the first visit only. */
  private readonly isSecondVisit: Uint8Array;
  private readonly phoneLine: number[] = [];
  private phoneNext = 0;
  private phonesFree: number;
  private readonly current: Int32Array;
  private readonly routeNext: Int32Array;
  private idle: number[] = [];
  private readonly onRoute: Uint8Array;
  private openCount = 0;
  /** Open, and not waiting for a part or for somebody to be at home. */
  private activeCount = 0;
  private readonly sure = { lostCents: 0, medicineLost: 0, arrivals: 0 };
  /** What has happened since it was empty last: counts only when that was a lull. */
  private readonly since = { lostCents: 0, medicineLost: 0, arrivals: 0 };
  private emptyAt = Infinity;

  constructor(
    private readonly calls: readonly ForecastCall[],
    private readonly world: World,
    private readonly crew: Crew,
    private readonly span: Span,
  ) {
    const count = world.calls.length;
    const { technicians } = crew;
    this.line = new WaitingLine(world);
    this.roster = new Roster(technicians);
    this.state = new Uint8Array(count);
    this.isSecondVisit = new Uint8Array(count);
    this.onRoute = new Uint8Array(count);
    this.current = new Int32Array(technicians.length).fill(-1);
    this.routeNext = new Int32Array(technicians.length);
    this.phonesFree = crew.phoneStaff;
    this.begin();
  }

  result(): Played {
    const { now, until, stepMs, handful } = this.span;
    const { calls } = this.world;
    const open = new Uint32Array(Math.floor((until - now) / stepMs) + 1);
    let nextCall = calls.open;
    let point = 0;
    if (this.activeCount === 0) this.emptyAt = now;
    for (;;) {
      const ringsAt = nextCall < calls.length ? calls.at[nextCall]! : Infinity;
      const next = Math.min(this.heap.nextAt, ringsAt);
      const stop = Math.min(next, until + 1);
      for (; point < open.length && now + point * stepMs < stop; point++)
        open[point] = this.openCount;
      if (next > until) break;
      if (ringsAt <= this.heap.nextAt) this.rings(nextCall++, next);
      else this.happens(this.heap.pop(), next);
      if (next >= this.emptyAt + LULL_MS) continue;
      if (this.activeCount === 0 && this.emptyAt === Infinity) this.emptyAt = next;
      else if (this.activeCount > handful && this.emptyAt < Infinity) this.wasALull();
    }
    if (this.emptyAt === Infinity) {
      this.loseWhatIsOpen();
      this.wasALull();
    }
    return { emptyAt: this.emptyAt, open, ...this.sure };
  }

  private wasALull(): void {
    this.emptyAt = Infinity;
    for (const key of ['lostCents', 'medicineLost', 'arrivals'] as const) {
      this.sure[key] += this.since[key];
      this.since[key] = 0;
    }
  }

  private get counts() {
    return this.emptyAt < Infinity ? this.since : this.sure;
  }

  private begin(): void {
    const { crew, world, span } = this;
    for (const { route, shifts } of crew.technicians)
      if (shifts.length > 0) for (const call of route) this.onRoute[call] = 1;
    const onPhone: number[] = [];
    this.calls.forEach(({ stage, checkingSince }, i) => {
      this.openCount++;
      if (stage === 'phone' || stage === 'visit') this.activeCount++;
      if (stage === 'phone') (checkingSince === null ? this.phoneLine : onPhone).push(i);
      else if (stage === 'visit') this.waits(i, span.now);
      else {
        this.state[i] = PARKED;
        this.isSecondVisit[i] = 1;
        this.heap.push(span.now + world.calls.parkedMs[i]!, i * KINDS + COMES_BACK);
      }
    });
    // Those who are spoken with stand at the head of the line, so that they are served at once.
    this.phoneLine.unshift(...onPhone);
    for (const i of this.phoneLine) this.state[i] = ON_PHONE;
    this.answerPhones(span.now);
    crew.technicians.forEach((technician, i) => {
      const [first] = technician.route;
      const known = crew.known[i]!;
      if (technician.underWay && first !== undefined && known >= 0) {
        this.line.remove(first);
        this.state[first] = WITH_SOMEBODY;
        this.current[i] = first;
        this.routeNext[i] = 1;
        this.roster.begin(i, this.roster.shiftAt(i, span.now));
        this.heap.push(span.now + world.restMs[known]!, i * KINDS + IS_FREE);
      } else this.heap.push(span.now, i * KINDS + IS_FREE);
    });
  }

  private rings(call: number, at: Instant): void {
    this.openCount++;
    this.activeCount++;
    this.counts.arrivals++;
    this.state[call] = ON_PHONE;
    this.phoneLine.push(call);
    this.answerPhones(at);
  }

  private happens(code: number, at: Instant): void {
    const kind = code % KINDS;
    const id = (code - kind) / KINDS;
    if (kind === PHONE_ENDS) {
      this.phonesFree++;
      const phoneEnd = this.world.calls.phoneEnd[id]!;
      if (phoneEnd === TO_VISIT) this.waits(id, at);
      else this.settle(id, phoneEnd === RUNS_AGAIN ? at : Infinity);
      this.answerPhones(at);
    } else if (kind === IS_FREE) {
      this.finish(id, at);
      this.seekWork(id, at);
    } else if (kind === COMES_BACK) {
      this.activeCount++;
      this.waits(id, at);
    } else if (this.state[id] === WAITING) {
      this.line.remove(id);
      this.settle(id, at);
    }
  }

  private answerPhones(at: Instant): void {
    while (this.phonesFree > 0 && this.phoneNext < this.phoneLine.length) {
      const call = this.phoneLine[this.phoneNext++]!;
      this.phonesFree--;
      this.heap.push(at + this.world.calls.handleMs[call]!, call * KINDS + PHONE_ENDS);
    }
  }

  private waits(call: number, at: Instant): void {
    this.state[call] = WAITING;
    this.heap.push(at + this.world.calls.endsAfterMs[call]!, call * KINDS + ENDS_ITSELF);
    if (this.onRoute[call]) return;
    this.line.add(call);
    this.wake(at);
  }

  private wake(at: Instant): void {
    if (this.idle.length === 0) return;
    const idle = this.idle;
    this.idle = [];
    for (const technician of idle) this.seekWork(technician, at);
  }

  /** Sends a technician to the next stop of the route, else to the most urgent call, else to rest. */
  private seekWork(technician: number, at: Instant): void {
    const { shifts, skills, route, pace = 1 } = this.crew.technicians[technician]!;
    const shift = this.roster.shiftAt(technician, at);
    if (shift < 0) return this.leaveRoute(technician, at);
    const { startsAt, endsAt } = shifts[shift]!;
    if (at < startsAt) return this.heap.push(startsAt, technician * KINDS + IS_FREE);
    if (at + LAST_VISIT * this.world.visitMs > endsAt) {
      const next = shifts[shift + 1];
      if (next) this.heap.push(Math.max(next.startsAt, at), technician * KINDS + IS_FREE);
      return this.leaveRoute(technician, at);
    }
    this.roster.begin(technician, shift);
    const backAt = this.roster.afterBreak(technician, shifts[shift]!, at);
    if (backAt > at) return this.heap.push(backAt, technician * KINDS + IS_FREE);
    let call = -1;
    while (call < 0 && this.routeNext[technician]! < route.length) {
      const next = route[this.routeNext[technician]!]!;
      this.routeNext[technician]!++;
      if (this.state[next] === WAITING) call = next;
    }
    if (call < 0) call = this.line.take(skills, at);
    if (call < 0) {
      this.idle.push(technician);
      this.roster.rests(technician, at);
      return;
    }
    this.state[call] = WITH_SOMEBODY;
    this.current[technician] = call;
    this.roster.works(technician);
    const { driveMs, serviceMs } = this.world.calls;
    const share = this.isCutShort(technician, call) ? DIAGNOSIS : 1;
    const workMs = share * pace * serviceMs[call]!;
    const freeAt = at + this.storeMs(technician, call) + driveMs[call]! + workMs;
    this.heap.push(freeAt, technician * KINDS + IS_FREE);
  }

  /** At the end of a shift the routes are planned anew: what is left goes back to the line. */
  private leaveRoute(technician: number, at: Instant): void {
    const { route } = this.crew.technicians[technician]!;
    const left = route.slice(this.routeNext[technician]);
    this.routeNext[technician] = route.length;
    for (const call of left) {
      this.onRoute[call] = 0;
      if (this.state[call] === WAITING) this.line.add(call);
    }
    if (left.length > 0) this.wake(at);
  }

  private isCutShort(technician: number, call: number): boolean {
    if (this.isSecondVisit[call]) return false;
    if (this.world.calls.firstVisitFails[call] === 1) return true;
    return this.lacks(technician, call) && this.crew.storeMs === null;
  }

  private lacks(technician: number, call: number): boolean {
    const part = this.world.calls.part[call]!;
    return part >= 0 && !this.isSecondVisit[call] && !this.roster.has(technician, part);
  }

  /** The way by the store for a part that the van lacks, as long as one more drive. Our estimate. */
  private storeMs(technician: number, call: number): number {
    const { storeMs } = this.crew;
    if (storeMs === null || !this.lacks(technician, call)) return 0;
    return storeMs + this.world.calls.driveMs[call]!;
  }

  private finish(technician: number, at: Instant): void {
    const call = this.current[technician]!;
    if (call < 0) return;
    this.current[technician] = -1;
    const { calls } = this.world;
    const part = calls.part[call]!;
    if (this.isCutShort(technician, call)) {
      this.isSecondVisit[call] = 1;
      this.onRoute[call] = 0;
      this.state[call] = PARKED;
      this.activeCount--;
      this.heap.push(at + calls.parkedMs[call]!, call * KINDS + COMES_BACK);
      return;
    }
    // What was fetched for this visit was never on the van.
    const isFromVan = part >= 0 && !this.isSecondVisit[call] && !this.lacks(technician, call);
    if (isFromVan) this.roster.uses(technician, part);
    this.settle(call, calls.isRepaired[call] === 1 ? at : Infinity);
  }

  /** @param coolAt when cooling came back; Infinity when it did not */
  private settle(call: number, coolAt: number): void {
    this.state[call] = SETTLED;
    this.openCount--;
    this.activeCount--;
    this.lose(call, coolAt);
  }

  private loseWhatIsOpen(): void {
    this.state.forEach((state, call) => {
      if (state !== LATER && state !== SETTLED) this.lose(call, this.span.until);
    });
  }

  private lose(call: number, coolAt: number): void {
    // What had been lost before is past; a call to come may bring its loss with it.
    const from = call >= this.world.calls.open ? -Infinity : this.span.now;
    const { cents, hasMedicine } = this.world.stakes.lost(call, from, coolAt);
    this.counts.lostCents += cents;
    if (hasMedicine) this.counts.medicineLost++;
  }
}
