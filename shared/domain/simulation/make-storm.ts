import { Dice } from './dice';
import { NEVER, type Stake, type Storm, type StormCall, type StormTechnician } from './storm';

export interface StormOptions {
  readonly seed: number;
  /** Calls in all; some are settled by phone. */
  readonly calls?: number;
  readonly technicians?: number;
}

/*
 * All figures of this file are made up to be plausible and are no measurements; what follows from
 * published guidance is said so beside it.
 */
const MINUTE = 60;
const HOUR = 3600;
const DAY = 24 * HOUR;
const DAYS = 2;
const STORM_AT = 5 * HOUR;
const FEEDERS = 14;
const SETTLED_BY_PHONE = 0.3;
const APPOINTMENTS = 0.08;
const CALLED_OFF = 0.04;
const SEALED_SYSTEM = 0.18;
const ELECTRICAL = 0.35;
const NEEDS_PART = 0.18;
const MEAN_SERVICE = 45 * MINUTE;
const SERVICE_SPREAD = 0.5;
const DRIVE_SPREAD = 0.18;
const METRES_PER_SECOND = 40_000 / HOUR;
const CIRCUITY = 1.3;
const PARKING = 2 * MINUTE;
/** Nobody takes calls by night; who calls then is called back in the morning. */
const DESK_OPENS = 6.5 * HOUR;
const DESK_CLOSES = 22 * HOUR;

type Point = readonly [east: number, north: number];

interface Feeder {
  readonly centre: Point;
  readonly reach: number;
  /** Share of the calls. */
  readonly share: number;
  readonly restoredAt: number;
}

/** Draws a storm; the same options give the same one. */
export function makeStorm({
  seed,
  calls: count = 600,
  technicians: crew = 12,
}: StormOptions): Storm {
  const dice = new Dice(seed);
  const width = dice.between(20_000, 28_000);
  const height = dice.between(16_000, 24_000);
  const feeders = makeFeeders(dice, width, height);
  const points: Point[] = [];
  const place = (point: Point): number => points.push(point) - 1;
  const somewhere = (): Point => [dice.between(0, width), dice.between(0, height)];

  const technicians = Array.from({ length: crew }, (_, index) =>
    makeTechnician(dice, index, place(somewhere())),
  );
  const toVisit = Array.from({ length: count }, () => dice.chance(SETTLED_BY_PHONE)).filter(
    (settled) => !settled,
  ).length;
  const calls = Array.from({ length: toVisit }, () => makeCall(dice, feeders, place))
    .sort((one, other) => one.calledAt - other.calledAt)
    .map((call, index): StormCall => ({ ...call, id: `call-${index}` }));

  const expectedDrive = drives(points);
  return {
    seed,
    calls,
    settledByPhone: count - toVisit,
    technicians,
    places: points.length,
    expectedDrive,
    actualDrive: expectedDrive.map((seconds) => seconds * dice.noise(DRIVE_SPREAD)),
    end: Math.max(...technicians.flatMap(({ shifts }) => shifts.map(({ end }) => end))),
  };
}

/** Feeders come back in waves, the large ones first. */
function makeFeeders(dice: Dice, width: number, height: number): Feeder[] {
  const sizes = Array.from({ length: FEEDERS }, () => dice.between(0.3, 2)).sort((a, b) => b - a);
  const total = sizes.reduce((sum, size) => sum + size, 0);
  const waves = [3, 6, 10, 26].map((hours) => STORM_AT + hours * HOUR);
  return sizes.map((size, index) => ({
    centre: [dice.between(0, width), dice.between(0, height)],
    reach: dice.between(900, 3200),
    share: size / total,
    restoredAt:
      waves[Math.min(waves.length - 1, Math.floor((index * waves.length) / FEEDERS))]! +
      dice.between(0, 2 * HOUR),
  }));
}

function makeTechnician(dice: Dice, index: number, home: number): StormTechnician {
  const variant = dice.below(4);
  // Most work from 07 to 19 h; some begin or end at other hours.
  const [start, end] = variant === 0 ? [6, 18] : variant === 1 ? [8, 18] : [7, 19];
  const skills = ['electrical', 'sealed-system'].filter(
    // Every third has everything, so that no kind of work is left undone for want of a skill alone.
    (skill) => index % 3 === 0 || dice.chance(skill === 'electrical' ? 0.75 : 0.3),
  );
  return {
    id: `technician-${index}`,
    home,
    skills,
    parts: { 'start-relay': 4 + dice.below(5), 'control-board': 1 + dice.below(4) },
    shifts: Array.from({ length: DAYS }, (_, day) => ({
      start: day * DAY + start * HOUR,
      end: day * DAY + end * HOUR,
    })),
  };
}

function makeCall(
  dice: Dice,
  feeders: readonly Feeder[],
  place: (point: Point) => number,
): Omit<StormCall, 'id'> {
  const feeder = pickFeeder(dice, feeders);
  const wanted = callTime(dice, feeder);
  const calledAt = whenDeskIsOpen(dice, wanted);
  const readyAt = calledAt + dice.between(8, 25) * MINUTE;
  const isSealed = dice.chance(SEALED_SYSTEM);
  const known = dice.normal();
  const unknown = dice.normal();
  const half = SERVICE_SPREAD / Math.SQRT2;
  const expectedService = MEAN_SERVICE * Math.exp(half * known - half ** 2 / 2);
  return {
    place: place([
      feeder.centre[0] + feeder.reach * dice.normal(),
      feeder.centre[1] + feeder.reach * dice.normal(),
    ]),
    calledAt,
    readyAt,
    cancelledAt: dice.chance(CALLED_OFF) ? readyAt + dice.exponential(5 * HOUR) : NEVER,
    skills: isSealed ? ['sealed-system'] : dice.chance(ELECTRICAL) ? ['electrical'] : [],
    part: dice.chance(NEEDS_PART) ? (dice.chance(0.7) ? 'start-relay' : 'control-board') : null,
    // The unit has stood still for a while when its household notices.
    stakes: makeStakes(dice, wanted - dice.between(0, 45) * MINUTE),
    window: dice.chance(APPOINTMENTS) ? makeWindow(dice, readyAt) : null,
    expectedService,
    actualService: expectedService * Math.exp(half * unknown - half ** 2 / 2),
  };
}

function pickFeeder(dice: Dice, feeders: readonly Feeder[]): Feeder {
  let left = dice.unit();
  return feeders.find(({ share }) => (left -= share) < 0) ?? feeders.at(-1)!;
}

/** Some call while the power is out, most soon after it is back, some at any time. */
function callTime(dice: Dice, { restoredAt }: Feeder): number {
  const draw = dice.unit();
  if (draw < 0.2) return dice.between(STORM_AT, restoredAt);
  if (draw < 0.85) return restoredAt + dice.exponential(2 * HOUR);
  return dice.between(STORM_AT, (DAYS - 1) * DAY + 16 * HOUR);
}

function whenDeskIsOpen(dice: Dice, wanted: number): number {
  const day = Math.floor(wanted / DAY);
  const time = wanted - day * DAY;
  if (time >= DESK_OPENS && time < DESK_CLOSES) return wanted;
  const morning = (time < DESK_OPENS ? day : day + 1) * DAY + DESK_OPENS;
  return morning + dice.between(0, 1.5 * HOUR);
}

/**
 * Refrigerator 4 h; freezer 48 h when full, 24 h when half full. Source: USDA FSIS, "Keep Your Food Safe
 * During Emergencies". Medicine at 6 h and all values are made up.
 */
function makeStakes(dice: Dice, clockStart: number): Stake[] {
  const stakes: Stake[] = [];
  const stake = (kind: Stake['kind'], hours: number, value: number): void =>
    void stakes.push({ kind, at: clockStart + hours * HOUR, value: Math.round(value) });
  if (dice.chance(0.65)) stake('fridge', 4, 200 * dice.noise(0.3));
  if (dice.chance(0.6)) stake('freezer', dice.chance(0.5) ? 24 : 48, 400 * dice.noise(0.3));
  if (dice.chance(0.05)) stake('medicine', 6, 1200 * dice.noise(0.2));
  return stakes;
}

/** Two or three hours, agreed on the phone: some time later that day, or on the next; none when it is too late for both. */
function makeWindow(dice: Dice, readyAt: number): readonly [number, number] | null {
  const earliest = readyAt + dice.between(1, 8) * HOUR;
  const morning = 8 + dice.below(4);
  const hours = 2 + dice.below(2);
  const day = Math.floor(earliest / DAY);
  const time = Math.max(8 * HOUR, earliest - day * DAY);
  const isToday = time <= 16 * HOUR;
  if (!isToday && day >= DAYS - 1) return null;
  const start = isToday
    ? day * DAY + Math.ceil(time / HALF_HOUR) * HALF_HOUR
    : (day + 1) * DAY + morning * HOUR;
  return [start, start + hours * HOUR];
}
const HALF_HOUR = 1800;

function drives(points: readonly Point[]): Float64Array {
  const table = new Float64Array(points.length ** 2);
  points.forEach(([east, north], from) => {
    points.forEach(([eastTo, northTo], to) => {
      const metres = Math.hypot(eastTo - east, northTo - north) * CIRCUITY;
      if (from !== to)
        table[from * points.length + to] = Math.round(metres / METRES_PER_SECOND + PARKING);
    });
  });
  return table;
}
