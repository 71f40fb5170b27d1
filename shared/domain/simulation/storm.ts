import type { PlanDeadline } from '../planner/problem';

/**
 * A made-up storm: what happens is all in here, drawn beforehand, so that every policy meets the same
 * calls, the same work and the same traffic. Times are seconds from midnight of its first day.
 */
export interface Storm {
  readonly seed: number;
  /** Calls that need a visit, by the time of the call. Those settled by phone are only counted. */
  readonly calls: readonly StormCall[];
  readonly settledByPhone: number;
  readonly technicians: readonly StormTechnician[];
  /** Number of places; technicians' homes first, then the calls' doors. */
  readonly places: number;
  /** Seconds that a drive is thought to take, from × places + to, and that it will take. */
  readonly expectedDrive: Float64Array;
  readonly actualDrive: Float64Array;
  /** When nothing more can happen. */
  readonly end: number;
}

export interface StormCall {
  readonly id: string;
  readonly place: number;
  readonly calledAt: number;
  /** When the phone check has shown that a visit is needed; nobody plans it before. */
  readonly readyAt: number;
  /** When the household calls it off, if nobody has begun by then. */
  readonly cancelledAt: number;
  readonly skills: readonly string[];
  readonly part: string | null;
  /** What is lost when the visit begins later, in dollars. */
  readonly stakes: readonly Stake[];
  readonly window: readonly [from: number, to: number] | null;
  /** Seconds of work as the phone check lets one think, and as it will turn out. */
  readonly expectedService: number;
  readonly actualService: number;
}

export const STAKES = ['fridge', 'freezer', 'medicine'] as const;
export interface Stake extends PlanDeadline {
  readonly kind: (typeof STAKES)[number];
}

export interface StormTechnician {
  readonly id: string;
  readonly home: number;
  readonly skills: readonly string[];
  readonly parts: Readonly<Record<string, number>>;
  readonly shifts: readonly { readonly start: number; readonly end: number }[];
}

/** The call is not called off. */
export const NEVER = Infinity;
/** No policy keeps anybody longer after the shift's end. */
export const MOST_OVERTIME = 3600;
