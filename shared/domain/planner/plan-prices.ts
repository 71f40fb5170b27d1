import { DEFAULT_WEIGHTS, type PlanWeights } from './problem';

/** What the manager sets of a plan's prices, in dollars, hours and minutes. */
export interface PlanPrices {
  readonly driveDollarsPerHour: number;
  /** For an ordinary call; food counts twice, medicine as its own setting says. */
  readonly waitDollarsPerHour: number;
  /** Of a promised window missed; counted once more from some minutes before its end on: see pose.ts. */
  readonly lateDollars: number;
  readonly lateDollarsPerHour: number;
  readonly overtimeDollarsPerHour: number;
  readonly mostOvertimeMinutes: number;
  readonly leftOutDollars: number;
  readonly otherTechnicianDollars: number;
  readonly otherTimeDollars: number;
  /** A start that moves by less is the same promise. */
  readonly otherTimeMinutes: number;
  /** Stops that begin later than this from now may be changed at no price. */
  readonly promisedAheadMinutes: number;
}

/**
 * Our estimates, no source: prices that make driving and waiting small beside a freezer of food. They were
 * tried on made-up storms (DEVELOPERS.md).
 */
export const DEFAULT_PRICES: PlanPrices = {
  // A technician's hour in a storm is worth what the next visit saves, and not only its fuel and wage.
  driveDollarsPerHour: 100,
  waitDollarsPerHour: DEFAULT_WEIGHTS.waitPerHour,
  lateDollars: 350,
  lateDollarsPerHour: DEFAULT_WEIGHTS.latePerHour,
  overtimeDollarsPerHour: DEFAULT_WEIGHTS.overtimePerHour,
  mostOvertimeMinutes: DEFAULT_WEIGHTS.maxOvertime / 60,
  leftOutDollars: DEFAULT_WEIGHTS.unservedBase,
  otherTechnicianDollars: 40,
  otherTimeDollars: 20,
  otherTimeMinutes: DEFAULT_WEIGHTS.movedBy / 60,
  promisedAheadMinutes: DEFAULT_WEIGHTS.churnHorizon / 60,
};

/** What a new plan has to gain before it takes the place of the one in force, in dollars: our estimate. */
export const DEFAULT_LEAST_GAIN = 25;

/** The manager's prices as the planner counts them: in seconds. */
export const weightsOf = (prices: PlanPrices): PlanWeights => ({
  travelPerHour: prices.driveDollarsPerHour,
  waitPerHour: prices.waitDollarsPerHour,
  lateFixed: prices.lateDollars,
  latePerHour: prices.lateDollarsPerHour,
  overtimePerHour: prices.overtimeDollarsPerHour,
  maxOvertime: prices.mostOvertimeMinutes * 60,
  unservedBase: prices.leftOutDollars,
  churnReassign: prices.otherTechnicianDollars,
  churnMoved: prices.otherTimeDollars,
  movedBy: prices.otherTimeMinutes * 60,
  churnHorizon: prices.promisedAheadMinutes * 60,
});
