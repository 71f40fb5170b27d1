import { HOUR_MS, MINUTE_MS, type Instant } from '../instant';

/** A drive as it was driven, beside what the road graph said of its way. */
export interface MeasuredDrive {
  readonly startedAt: Instant;
  readonly arrivedAt: Instant;
  /** Whether a position of the van said where the drive began. */
  readonly hasStart: boolean;
  /** Whether the technician stood still on the way or turned aside, as far as anybody knows. */
  readonly isPaused: boolean;
  /** Seconds that the way was expected to take, by road class, with the factors of that hour. */
  readonly expectedSeconds: Readonly<Record<string, number>>;
}

export interface SpeedCorrection {
  /** How many drives it is made from, weighed by what share of each was on this class of road. */
  readonly drives: number;
  /** Multiplies the speed of the class: below 1 is slower than expected. */
  readonly factor: number;
}

export type SpeedCorrections = Readonly<Record<string, SpeedCorrection>>;

/** No class of road is corrected beyond these: our bounds. Slower or faster is a storm road, not a habit. */
export const LEAST_CORRECTION = 0.5;
export const MOST_CORRECTION = 1.5;
/** With fewer drives on a class of road its speed stays as it is: our estimate. */
export const LEAST_DRIVES = 5;
/**
 * How many drives the figure of before counts as: a class with as many real ones moves half way. Our
 * estimate, set so that a storm's first night moves little and its third most of the way.
 */
const PRIOR_DRIVES = 5;
/** Shorter is parking, longer is a break on the way: our bounds. */
export const SHORTEST_DRIVE_MS = 2 * MINUTE_MS;
export const LONGEST_DRIVE_MS = 3 * HOUR_MS;
/** A drive that took so many times what was expected, or as little, was not the way that was thought of. */
const MOST_TIMES = 4;
/** Residuals beyond so many spreads count less: Huber's tuning for 95 % efficiency (from memory). */
const HUBER_K = 1.345;
/** The spread below which Huber's bound does not shrink: doors, lights and luck, our estimate. */
const LEAST_SPREAD = 0.08;
const ROUNDS = 40;

/** Whether a drive tells anything about speeds; why not, in words. */
export function driveFault(drive: MeasuredDrive): string | null {
  const tookMs = drive.arrivedAt - drive.startedAt;
  const expected = total(drive.expectedSeconds);
  if (!drive.hasStart) return 'no position at its start';
  if (drive.isPaused) return 'paused on the way';
  if (!(tookMs >= SHORTEST_DRIVE_MS)) return 'shorter than 2 minutes';
  if (tookMs > LONGEST_DRIVE_MS) return 'longer than 3 hours';
  if (!(expected >= SHORTEST_DRIVE_MS / 1000)) return 'too short a way';
  const times = tookMs / 1000 / expected;
  if (times > MOST_TIMES || times < 1 / MOST_TIMES) return 'not the way that was expected';
  return null;
}

/**
 * How much faster or slower each class of road was than expected, from whole drives that ran over
 * several classes. A drive took as many times what was expected as its classes did, each weighed by the
 * time expected on it; those times are fitted by ridge regression with Huber's weights. The ridge draws
 * a class with few drives to 1, and the weights keep one odd drive from counting for much.
 *
 * Huber, "Robust Estimation of a Location Parameter", Ann. Math. Statist. 35 (1964), for the weights and
 * the tuning constant (from memory).
 *
 * @param drives in any order; those that tell nothing are left out
 * @returns by class, those alone that some drive ran on
 */
export function learnedSpeeds(drives: readonly MeasuredDrive[]): SpeedCorrections {
  // Sums of floating point numbers depend on their order; the result must not.
  const rows = drives
    .filter((drive) => driveFault(drive) === null)
    .map(rowOf)
    .sort(byContent);
  const classes = [...new Set(rows.flatMap(({ shares }) => Object.keys(shares)))].sort();
  if (classes.length === 0) return {};
  const excess = fit(rows, classes);
  return Object.fromEntries(
    classes.map((name, i) => {
      const counted = rows.reduce((sum, { shares }) => sum + (shares[name] ?? 0), 0);
      const met = rows.filter(({ shares }) => (shares[name] ?? 0) > 0).length;
      const factor = met < LEAST_DRIVES ? 1 : bounded(1 / Math.max(1 + (excess[i] ?? 0), SMALLEST));
      return [name, { drives: Math.round(counted * 10) / 10, factor }];
    }),
  );
}

interface Row {
  /** The time taken over the time expected, less 1. */
  readonly excess: number;
  /** Of the expected time, by class; they add up to 1. */
  readonly shares: Readonly<Record<string, number>>;
  readonly key: string;
}

function rowOf({ startedAt, arrivedAt, expectedSeconds }: MeasuredDrive): Row {
  const expected = total(expectedSeconds);
  const shares = Object.fromEntries(
    Object.entries(expectedSeconds)
      .filter(([, seconds]) => seconds > 0)
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([name, seconds]) => [name, seconds / expected]),
  );
  const excess = (arrivedAt - startedAt) / 1000 / expected - 1;
  return { excess, shares, key: `${excess} ${JSON.stringify(shares)}` };
}

const byContent = (a: Row, b: Row): number => (a.key < b.key ? -1 : a.key > b.key ? 1 : 0);

/** Iteratively reweighted ridge regression. @returns per class how many times longer than expected, less 1 */
function fit(rows: readonly Row[], classes: readonly string[]): number[] {
  let excess = classes.map(() => 0);
  for (let round = 0; round < ROUNDS; round++) {
    const residuals = rows.map((row) => row.excess - predicted(row, classes, excess));
    const limit = HUBER_K * Math.max(LEAST_SPREAD, spreadOf(residuals));
    const weights = residuals.map((one) => Math.min(1, limit / Math.max(Math.abs(one), 1e-9)));
    const next = ridge(rows, classes, weights);
    const moved = Math.max(...next.map((one, i) => Math.abs(one - (excess[i] ?? 0))));
    excess = next;
    if (moved < 1e-9) break;
  }
  return excess;
}

const predicted = (
  { shares }: Row,
  classes: readonly string[],
  excess: readonly number[],
): number => classes.reduce((sum, name, i) => sum + (shares[name] ?? 0) * (excess[i] ?? 0), 0);

/** Median absolute deviation as a standard deviation of a normal spread. */
function spreadOf(residuals: readonly number[]): number {
  return median(residuals.map(Math.abs)) / 0.6745;
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  if (sorted.length % 2 === 1) return sorted[middle] ?? 0;
  return ((sorted[middle - 1] ?? 0) + (sorted[middle] ?? 0)) / 2;
}

function ridge(
  rows: readonly Row[],
  classes: readonly string[],
  weights: readonly number[],
): number[] {
  const n = classes.length;
  const left = classes.map((_, i) => classes.map((_other, j) => (i === j ? PRIOR_DRIVES : 0)));
  const right = classes.map(() => 0);
  rows.forEach((row, k) => {
    const weight = weights[k] ?? 0;
    for (let i = 0; i < n; i++) {
      const share = row.shares[classes[i]!] ?? 0;
      if (share === 0) continue;
      right[i]! += weight * share * row.excess;
      for (let j = 0; j < n; j++) left[i]![j]! += weight * share * (row.shares[classes[j]!] ?? 0);
    }
  });
  return solved(left, right);
}

/** Gaussian elimination with pivots; the ridge keeps the matrix positive definite. */
function solved(matrix: number[][], right: number[]): number[] {
  const n = right.length;
  for (let column = 0; column < n; column++) {
    let pivot = column;
    for (let row = column + 1; row < n; row++)
      if (Math.abs(matrix[row]![column]!) > Math.abs(matrix[pivot]![column]!)) pivot = row;
    [matrix[column], matrix[pivot]] = [matrix[pivot]!, matrix[column]!];
    [right[column], right[pivot]] = [right[pivot]!, right[column]!];
    for (let row = column + 1; row < n; row++) {
      const times = matrix[row]![column]! / matrix[column]![column]!;
      for (let k = column; k < n; k++) matrix[row]![k]! -= times * matrix[column]![k]!;
      right[row]! -= times * right[column]!;
    }
  }
  const answer = new Array<number>(n).fill(0);
  for (let row = n - 1; row >= 0; row--) {
    let rest = right[row]!;
    for (let k = row + 1; k < n; k++) rest -= matrix[row]![k]! * answer[k]!;
    answer[row] = rest / matrix[row]![row]!;
  }
  return answer;
}

/** Keeps a class from being passed in no time, which the bound above then catches. */
const SMALLEST = 1e-3;

const bounded = (factor: number): number =>
  Math.min(MOST_CORRECTION, Math.max(LEAST_CORRECTION, Math.round(factor * 1000) / 1000));

const total = (seconds: Readonly<Record<string, number>>): number =>
  Object.values(seconds).reduce((sum, one) => sum + one, 0);
