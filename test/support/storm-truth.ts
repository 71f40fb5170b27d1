import { SeededRandom } from '@shared/domain/planner/random';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { handfulFor, LULL_MS } from '@shared/domain/forecast/played';

/**
 * A storm as it goes, minute by minute, to hold forecasts against: made apart from the forecast's own
 * simulation, with other distributions, with places on a map, and with technicians who choose by
 * drive and value. What the forecast has to guess (rates, shares, times) is drawn anew for every storm.
 */
export interface TrueCall {
  readonly at: Instant;
  readonly area: number | null;
  readonly x: number;
  readonly y: number;
  readonly handle: number;
  readonly phone: 'visit' | 'runs' | 'other';
  readonly service: number;
  readonly chances: readonly (readonly [number, number])[];
  readonly part: number;
  readonly isAway: boolean;
  readonly isRepaired: boolean;
  readonly parkedMinutes: number;
  readonly endsAfterMinutes: number;
  readonly compartments: readonly {
    readonly valueCents: number;
    readonly hoursLeft: number | null;
    readonly isMedicine: boolean;
  }[];
  state: 'later' | 'line' | 'phone' | 'waiting' | 'taken' | 'away' | 'parts' | 'settled';
  since: Instant;
  phoneFrom: Instant;
  waited: number;
  second: boolean;
  settledAt: Instant;
  coolAt: Instant;
  settledBy: 'phone' | 'visit' | 'itself' | null;
}

export interface TrueTechnician {
  readonly shifts: readonly { startsAt: Instant; endsAt: Instant }[];
  readonly stock: readonly number[];
  van: number[];
  day: number;
  x: number;
  y: number;
  call: TrueCall | null;
  leftAt: Instant;
  arrivesAt: Instant;
  doneAt: Instant;
}

export interface TrueArea {
  readonly outAt: Instant;
  readonly backAt: Instant;
}

export interface Seen {
  readonly service: number[];
  readonly drive: number[];
  readonly handle: number[];
  restored: number;
  otherVisits: number;
  noAccess: number;
  ordered: number;
  toVisit: number;
  runs: number;
  other: number;
  ended: number;
  waitingMinutes: number;
}

export interface Outcome {
  readonly emptyAt: Instant;
  readonly lostCents: number;
  readonly medicineLost: number;
}

export const ZONE_MS = -4 * HOUR_MS;
export const USUAL_SERVICE = 45;
const PARTS = 6;
const END_DAYS = 8;

export class TrueStorm {
  readonly calls: TrueCall[];
  readonly areas: TrueArea[];
  readonly technicians: TrueTechnician[];
  readonly phoneStaff: number;
  readonly start: Instant;
  readonly lookAt: Instant;
  readonly seen: Seen = {
    service: [],
    drive: [],
    handle: [],
    restored: 0,
    otherVisits: 0,
    noAccess: 0,
    ordered: 0,
    toVisit: 0,
    runs: 0,
    other: 0,
    ended: 0,
    waitingMinutes: 0,
  };
  now: Instant;
  private readonly dice: Dice;
  private readonly minutesAKm: number;
  private readonly turnaround: number;

  constructor(seed: number) {
    const dice = (this.dice = new Dice(seed));
    const midnight = Date.UTC(2031, 8, 14) - ZONE_MS;
    this.start = midnight + dice.between(0, 20) * HOUR_MS;
    this.lookAt = Math.floor((this.start + dice.between(7, 34) * HOUR_MS) / MINUTE_MS) * MINUTE_MS;
    this.now = this.start;
    this.phoneStaff = 2 + dice.below(4);
    this.minutesAKm = (60 / dice.between(32, 48)) * 1.3;
    this.turnaround = dice.between(2, 7);
    this.areas = Array.from({ length: 5 + dice.below(20) }, () => {
      const outAt = this.start + dice.between(0, 60) * MINUTE_MS;
      return { outAt, backAt: outAt + Math.min(72, 9 * Math.exp(0.8 * dice.normal())) * HOUR_MS };
    });
    this.calls = makeCalls(dice, this.areas, this.start).sort((a, b) => a.at - b.at);
    this.technicians = makeTechnicians(dice, midnight);
  }

  get openCalls(): TrueCall[] {
    return this.calls.filter(({ state }) => state !== 'later' && state !== 'settled');
  }

  runUntil(moment: Instant): void {
    for (; this.now < moment; this.now += MINUTE_MS) this.minute();
  }

  /** Goes on to the end and tells what became of it. */
  outcome(): Outcome {
    const from = this.now;
    const handful = handfulFor(this.technicians.length);
    const end = this.start + END_DAYS * 24 * HOUR_MS;
    const active = () =>
      this.openCalls.filter(({ state }) => state !== 'away' && state !== 'parts').length;
    let emptyAt = active() === 0 ? from : Infinity;
    while (this.now < end && this.now < emptyAt + LULL_MS) {
      this.minute();
      this.now += MINUTE_MS;
      const open = active();
      if (open === 0 && emptyAt === Infinity) emptyAt = this.now;
      if (open > handful) emptyAt = Infinity;
    }
    let lostCents = 0;
    let medicineLost = 0;
    for (const call of this.calls) {
      if (call.state === 'later' || call.at > emptyAt) continue;
      const coolAt = call.state === 'settled' ? call.coolAt : end;
      const lost = call.compartments.filter(({ hoursLeft }) => {
        if (hoursLeft === null) return false;
        const saveBy = call.at + hoursLeft * HOUR_MS;
        return saveBy <= coolAt && (saveBy > from || call.at > from);
      });
      lostCents += lost.reduce((sum, { valueCents }) => sum + valueCents, 0);
      if (lost.some(({ isMedicine }) => isMedicine)) medicineLost++;
    }
    return { emptyAt, lostCents, medicineLost };
  }

  private minute(): void {
    const { now, seen } = this;
    for (const call of this.calls) {
      if (call.state === 'later') {
        if (call.at > now) break;
        call.state = 'line';
      }
    }
    let talking = 0;
    for (const call of this.calls) {
      if (call.state === 'phone') {
        if (now - call.phoneFrom >= call.handle * MINUTE_MS) {
          seen.handle.push(call.handle);
          if (call.phone === 'visit') {
            call.state = 'waiting';
            call.since = now;
            seen.toVisit++;
          } else this.settle(call, 'phone', call.phone === 'runs');
        } else talking++;
      } else if (call.state === 'waiting') {
        call.waited++;
        seen.waitingMinutes++;
        if (call.waited > call.endsAfterMinutes) this.settle(call, 'itself', true);
      } else if (call.state === 'away' || call.state === 'parts') {
        if (now - call.since > call.parkedMinutes * MINUTE_MS) {
          call.state = 'waiting';
          call.since = now;
        }
      }
    }
    for (const call of this.calls) {
      if (call.state !== 'line') continue;
      if (talking >= this.phoneStaff) break;
      talking++;
      call.state = 'phone';
      call.phoneFrom = now;
    }
    for (const technician of this.technicians) this.work(technician);
  }

  private settle(call: TrueCall, by: TrueCall['settledBy'], isCool: boolean): void {
    call.state = 'settled';
    call.settledAt = this.now;
    call.settledBy = by;
    call.coolAt = isCool ? this.now : Infinity;
    if (by === 'phone') {
      if (isCool) this.seen.runs++;
      else this.seen.other++;
    } else if (by === 'itself') this.seen.ended++;
    else if (isCool) this.seen.restored++;
    else this.seen.otherVisits++;
  }

  private work(technician: TrueTechnician): void {
    const { now, seen } = this;
    const { call } = technician;
    if (call) {
      if (now < technician.doneAt) return;
      technician.call = null;
      [technician.x, technician.y] = [call.x, call.y];
      seen.drive.push((technician.arrivesAt - technician.leftAt) / MINUTE_MS);
      seen.service.push((technician.doneAt - technician.arrivesAt) / MINUTE_MS);
      if (!call.second && call.isAway) {
        call.state = 'away';
        seen.noAccess++;
      } else if (!call.second && call.part >= 0 && !(technician.van[call.part]! > 0)) {
        call.state = 'parts';
        seen.ordered++;
      } else {
        if (!call.second && call.part >= 0) technician.van[call.part]!--;
        this.settle(call, 'visit', call.isRepaired);
      }
      call.second = true;
      call.since = now;
    }
    const day = technician.shifts.findIndex(
      ({ startsAt, endsAt }) => startsAt <= now && now < endsAt,
    );
    if (day < 0) return;
    if (day !== technician.day) {
      technician.day = day;
      technician.van = [...technician.stock];
    }
    const left = (technician.shifts[day]!.endsAt - now) / MINUTE_MS;
    let best: TrueCall | null = null;
    let most = -Infinity;
    for (const one of this.calls) {
      if (one.state !== 'waiting') continue;
      const drive = this.drive(technician, one);
      if (drive + USUAL_SERVICE > left) continue;
      const value = worthOf(one, now, drive + USUAL_SERVICE);
      const score = (value + 2_000) / (drive + USUAL_SERVICE) + (now - one.at) / HOUR_MS;
      if (score > most) [best, most] = [one, score];
    }
    if (!best) return;
    const drive = this.drive(technician, best) * Math.exp(0.2 * this.dice.normal());
    const isShort =
      !best.second && (best.isAway || (best.part >= 0 && !(technician.van[best.part]! > 0)));
    best.state = 'taken';
    technician.call = best;
    technician.leftAt = now;
    technician.arrivesAt = now + drive * MINUTE_MS;
    technician.doneAt =
      technician.arrivesAt + best.service * (isShort ? (best.isAway ? 0.25 : 0.7) : 1) * MINUTE_MS;
  }

  private drive(from: TrueTechnician, to: TrueCall): number {
    return this.turnaround + this.minutesAKm * Math.hypot(from.x - to.x, from.y - to.y);
  }
}

/** What a visit that takes so many minutes still saves, the sooner it is lost the more. */
function worthOf(call: TrueCall, now: Instant, minutes: number): number {
  let worth = 0;
  for (const { valueCents, hoursLeft, isMedicine } of call.compartments) {
    if (hoursLeft === null) continue;
    const left = (call.at - now) / MINUTE_MS + hoursLeft * 60;
    if (left > minutes) worth += ((isMedicine ? 5 : 1) * valueCents) / Math.max(1, left / 240);
  }
  return worth;
}

function makeCalls(dice: Dice, areas: readonly TrueArea[], start: Instant): TrueCall[] {
  const scale = Math.exp(0.6 * dice.normal());
  const ringMedian = dice.between(2, 4.5);
  const ringSpread = dice.between(0.8, 1.2);
  const early = dice.between(0.05, 0.25);
  const byPhone = dice.beta(9, 21);
  const handleMean = dice.between(6, 12);
  const serviceMean = USUAL_SERVICE * Math.exp(0.2 * dice.normal());
  const partFactor = dice.between(0.5, 0.95);
  const away = dice.between(0.03, 0.08);
  const repaired = dice.between(0.82, 0.95);
  const ending = dice.between(0.003, 0.02);
  const partHours = dice.between(14, 36);
  const homeHours = dice.between(5, 14);

  const one = (at: Instant, area: number | null, x: number, y: number): TrueCall => {
    const chances = chancesOf(dice);
    let left = dice.unit();
    const part = chances.find(([, chance]) => (left -= chance * partFactor) < 0)?.[0] ?? -1;
    const isAway = dice.unit() < away;
    const phone = dice.unit() >= byPhone ? 'visit' : dice.unit() < 0.75 ? 'runs' : 'other';
    return {
      at,
      area,
      x,
      y,
      chances,
      part,
      isAway,
      phone,
      handle: dice.gamma(4) * (handleMean / 4),
      service: dice.gamma(3.5) * (serviceMean / 3.5),
      isRepaired: dice.unit() < repaired,
      parkedMinutes: 60 * (isAway ? homeHours : partHours) * Math.exp(0.5 * dice.normal()),
      endsAfterMinutes: (-Math.log(1 - dice.unit()) / ending) * 60,
      compartments: compartmentsOf(dice),
      state: 'later',
      since: 0,
      phoneFrom: 0,
      waited: 0,
      second: false,
      settledAt: 0,
      coolAt: Infinity,
      settledBy: null,
    };
  };
  const calls = areas.flatMap(({ outAt, backAt }, area) => {
    const [x, y] = [dice.between(0, 40), dice.between(0, 30)];
    const count = Math.round(11 * scale * Math.exp(0.8 * dice.normal()));
    return Array.from({ length: count }, () => {
      const rings =
        dice.unit() < early
          ? outAt + dice.unit() * (backAt - outAt)
          : backAt + ringMedian * Math.exp(ringSpread * dice.normal()) * HOUR_MS;
      return one(awake(dice, rings), area, x + 1.5 * dice.normal(), y + 1.5 * dice.normal());
    });
  });
  const rate = dice.between(0.2, 1.4);
  const half = dice.between(14, 40);
  for (let hour = 0; hour < 24 * END_DAYS; hour += 0.05) {
    if (dice.unit() >= rate * 0.05 * Math.pow(0.5, hour / half)) continue;
    calls.push(
      one(awake(dice, start + hour * HOUR_MS), null, dice.between(0, 40), dice.between(0, 30)),
    );
  }
  return calls;
}

/** Who would ring between eleven and six mostly waits until the morning. */
function awake(dice: Dice, at: Instant): Instant {
  const local = at + ZONE_MS;
  const day = Math.floor(local / (24 * HOUR_MS));
  const hour = local / HOUR_MS - day * 24;
  if ((hour >= 6 && hour < 23) || dice.unit() < 0.2) return at;
  const morning = (hour >= 23 ? day + 1 : day) * 24 * HOUR_MS - ZONE_MS;
  return morning + (6.2 + 3 * dice.unit()) * HOUR_MS;
}

function chancesOf(dice: Dice): [number, number][] {
  const kind = dice.unit();
  if (kind < 0.3) return [];
  const part = dice.below(PARTS);
  return kind < 0.7
    ? [[part, 0.55]]
    : [
        [part, 0.3],
        [(part + 1) % PARTS, 0.2],
      ];
}

function compartmentsOf(dice: Dice): TrueCall['compartments'] {
  const value = (cents: number) => Math.round(cents * dice.between(0.5, 1.5));
  const made: { valueCents: number; hoursLeft: number | null; isMedicine: boolean }[] = [];
  if (dice.unit() < 0.7)
    made.push({ valueCents: value(15_000), hoursLeft: dice.between(-12, 6), isMedicine: false });
  if (dice.unit() < 0.8)
    made.push({ valueCents: value(28_000), hoursLeft: dice.between(-4, 44), isMedicine: false });
  if (dice.unit() < 0.08)
    made.push({
      valueCents: value(30_000),
      hoursLeft: dice.unit() < 0.3 ? null : dice.between(-2, 30),
      isMedicine: true,
    });
  if (dice.unit() < 0.04)
    made.push({ valueCents: value(400_000), hoursLeft: dice.between(-4, 4), isMedicine: false });
  return made;
}

function makeTechnicians(dice: Dice, midnight: Instant): TrueTechnician[] {
  const hasNights = dice.unit() < 0.3;
  return Array.from({ length: 5 + dice.below(12) }, (_, i) => {
    const begins = hasNights && i % 4 === 3 ? 19 : dice.unit() < 0.7 ? 7 : 9;
    const stock = Array.from({ length: PARTS }, () => dice.below(5));
    return {
      shifts: Array.from({ length: END_DAYS }, (_day, day) => ({
        startsAt: midnight + (day * 24 + begins) * HOUR_MS,
        endsAt: midnight + (day * 24 + begins + 11) * HOUR_MS,
      })),
      stock,
      van: [...stock],
      day: -1,
      x: dice.between(0, 40),
      y: dice.between(0, 30),
      call: null,
      leftAt: 0,
      arrivesAt: 0,
      doneAt: 0,
    };
  });
}

/** Draws of its own, so that no fault of the forecast's draws is shared: sums and rejections. */
class Dice {
  private readonly random: SeededRandom;
  constructor(seed: number) {
    this.random = new SeededRandom(seed ^ 0x5bd1e995);
  }
  unit(): number {
    return this.random.unit();
  }
  below(most: number): number {
    return this.random.below(most);
  }
  between(least: number, most: number): number {
    return least + (most - least) * this.unit();
  }
  normal(): number {
    return Math.sqrt(-2 * Math.log(1 - this.unit())) * Math.cos(2 * Math.PI * this.unit());
  }
  /** A sum of exponentials for whole shapes; the half is a normal's square. */
  gamma(shape: number): number {
    let sum = 0;
    for (let i = 0; i < Math.floor(shape); i++) sum -= Math.log(1 - this.unit());
    return shape % 1 > 0 ? sum + this.normal() ** 2 / 2 : sum;
  }
  beta(a: number, b: number): number {
    const x = this.gamma(a);
    return x / (x + this.gamma(b));
  }
}
