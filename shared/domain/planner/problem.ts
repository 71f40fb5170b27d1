/**
 * What the planner is asked and what it answers.
 *
 * All times are seconds on one clock (for the board: seconds since 1970). Money is in one unit for
 * values and weights; the default weights are dollars.
 *
 * The price of a plan is the sum of
 * - travel over every arc of every route, the way home included; a route without stops costs nothing;
 * - waiting of each call from `calledAt` to the start of its visit, times the call's weight;
 * - the value of each deadline that the visit's start has passed (a start at the deadline keeps it);
 * - lateness, a fixed part and a part per hour, of a start after the last window;
 * - overtime, from the shift's end to the arrival home;
 * - a change of technician, and on top of it a moved start, for stops that the previous plan promised
 *   within the churn horizon;
 * - for each call on no route: all its values, its waiting until the last shift ends, and a base
 *   price times its weight.
 */
export interface PlanProblem {
  readonly version: 1;
  readonly now: number;
  /** Number of places that `matrix` knows. */
  readonly locations: number;
  /**
   * Travel seconds: flat and row-major (from × locations + to), or one array per row. `NO_WAY_SECONDS`
   * where no way leads.
   */
  readonly matrix: ArrayLike<number> | readonly ArrayLike<number>[];
  readonly jobs: readonly PlanJob[];
  readonly technicians: readonly PlanTechnician[];
  /** Where a van can fetch parts that it lacks; without it a lacking part rules a technician out. */
  readonly shop?: PlanShop;
  /** The plan in force: where the search starts, and what a change of technician is measured by. */
  readonly previous?: PreviousPlan;
  readonly weights?: Partial<PlanWeights>;
}

/**
 * The company's store. A route fetches there, once a shift and before the first visit that needs one,
 * every part that its visits need and its van lacks; but not before an accepted stop, and nothing for
 * accepted stops. Visits use up what is on the van in the order of the day, shift by shift. The stop at
 * the shop begins at the arrival; where in the route it is made is for the plan to say.
 */
export interface PlanShop {
  /** Index of its place in the matrix. */
  readonly loc: number;
  /** Seconds that a stop there takes. */
  readonly seconds: number;
  /** When given, only these parts can be had there, and only so many. */
  readonly parts?: Readonly<Record<string, number>>;
}

/** One visit that a call needs. */
export interface PlanJob {
  readonly id: string;
  /** Index of its place in the matrix. */
  readonly loc: number;
  /** Seconds of work at the door. */
  readonly service: number;
  /** The same for technicians who are known to take longer or less, by their id. */
  readonly serviceBy?: Readonly<Record<string, number>>;
  readonly calledAt: number;
  /** No visit starts before this. */
  readonly earliest?: number;
  /** How much a minute of waiting counts: 1 normal, 2 food, 5 medicine. */
  readonly weight: number;
  /** Skills that the technician must have, all of them. */
  readonly skills: readonly string[];
  /** A part that the visit takes from the van. */
  readonly part?: string;
  /** In place of `part`: all that the visit takes, what it takes twice named twice. */
  readonly parts?: readonly string[];
  /**
   * Times agreed with the customer. An early arrival waits for the first window that is still open;
   * after the last one the visit starts at once and is late.
   */
  readonly windows?: readonly (readonly [from: number, to: number])[];
  /** What is lost when the visit starts later than `at`; up to one per compartment. */
  readonly deadlines?: readonly PlanDeadline[];
  /** When given, only these technicians may go. */
  readonly onlyTechnicians?: readonly string[];
}

export interface PlanDeadline {
  readonly at: number;
  readonly value: number;
}

export interface PlanTechnician {
  readonly id: string;
  /** Place where a shift ends, and where every shift but the first begins. */
  readonly home: number;
  /** Place where the technician is free next. */
  readonly at: number;
  /** Time when the technician is free next. */
  readonly availableAt: number;
  readonly skills: readonly string[];
  /** Parts on the van; not restocked between shifts, which is the cautious reading. */
  readonly parts: Readonly<Record<string, number>>;
  /** The current or next shift first. */
  readonly shifts: readonly PlanShift[];
  /**
   * Accepted or locked stops: they open the first shift's route in this order and never move. They
   * are kept even when skills, parts or the overtime limit say otherwise, because people agreed.
   */
  readonly frozen: readonly string[];
}

export interface PlanShift {
  readonly start: number;
  readonly end: number;
  /** Place where it begins: `at` for the first shift, `home` for the others, unless given. */
  readonly from?: number;
  /** Place where it ends: `home` unless given. */
  readonly to?: number;
  readonly breaks?: readonly PlanBreak[];
}

/**
 * A pause that is due. It is taken before a visit, where the technician then is (at the place of the visit
 * before, or where the shift begins): at the first such moment at or after `from`; or earlier, waiting
 * there until `from`, when the next visit would end after `to`. The stop at the shop counts as a visit here;
 * the way home does not, so after the last visit no pause is taken. A pause that could only begin after
 * `to` falls away. Breaks come one after the other in the order of `from`; several may be taken at one
 * place, each as if the one before were done.
 */
export interface PlanBreak {
  readonly from: number;
  readonly to: number;
  readonly seconds: number;
}

export interface PreviousPlan {
  readonly routes: readonly {
    readonly technician: string;
    readonly shift: number;
    readonly stops: readonly { readonly job: string; readonly start: number }[];
  }[];
}

export interface PlanWeights {
  readonly travelPerHour: number;
  /** Times the call's weight. */
  readonly waitPerHour: number;
  readonly latePerHour: number;
  readonly lateFixed: number;
  readonly overtimePerHour: number;
  /** Seconds past the shift's end that are allowed at all. */
  readonly maxOvertime: number;
  /** Price of a call on no route, times its weight. */
  readonly unservedBase: number;
  readonly churnReassign: number;
  /** Price of moving a start by more than `movedBy` from what the previous plan promised soon; 0 is none. */
  readonly churnMoved: number;
  /** Seconds of such a move that nobody minds. */
  readonly movedBy: number;
  /** Seconds from now within which a change of technician is priced. */
  readonly churnHorizon: number;
}

/** Our estimate: prices that make driving and waiting small beside a freezer of food. */
export const DEFAULT_WEIGHTS: PlanWeights = {
  travelPerHour: 40,
  waitPerHour: 2,
  latePerHour: 60,
  lateFixed: 30,
  overtimePerHour: 90,
  maxOvertime: 3600,
  unservedBase: 150,
  churnReassign: 15,
  churnMoved: 0,
  movedBy: 1800,
  churnHorizon: 7200,
};

export interface Plan {
  /** Routes with at least one stop. */
  readonly routes: readonly PlanRoute[];
  readonly unassigned: readonly UnassignedJob[];
  /** Price as defined above. */
  readonly cost: number;
  /** Rounds of search that were run. */
  readonly iterations: number;
}

export interface PlanRoute {
  readonly technician: string;
  /** Index into the technician's shifts. */
  readonly shift: number;
  readonly stops: readonly PlanStop[];
  /** Breaks and the stop at the shop, in their order; left out when there are none. */
  readonly halts?: readonly PlanHalt[];
  /** Arrival at the place where the shift ends. */
  readonly end: number;
}

export interface PlanHalt {
  readonly kind: 'break' | 'shop';
  /** The stop before which it is made, counted from 0. */
  readonly before: number;
  readonly start: number;
  readonly finish: number;
  /** What is fetched at the shop. */
  readonly parts?: Readonly<Record<string, number>>;
}

export interface PlanStop {
  readonly job: string;
  readonly arrive: number;
  readonly start: number;
  readonly finish: number;
}

/**
 * Stands for a drive that nobody can make: longer than any shift, and short enough to be added and
 * priced like any other.
 */
export const NO_WAY_SECONDS = 30 * 24 * 3600;

export const UNASSIGNED_REASONS = ['skill', 'part', 'unreachable', 'no_shift', 'capacity'] as const;
/**
 * Why a call is on no route: nobody who may go has the skill; no van has the part left; no open road
 * leads there and back from where anybody who may go starts; no shift is long enough for this visit; or the time goes to visits that save more.
 */
export type UnassignedReason = (typeof UNASSIGNED_REASONS)[number];

export interface UnassignedJob {
  readonly job: string;
  readonly reason: UnassignedReason;
  /** The reason as a sentence for the dispatcher. */
  readonly because: string;
}
