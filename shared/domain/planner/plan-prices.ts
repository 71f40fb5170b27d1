import type { PlanWeights } from './problem';

/** What the manager sets of a plan's prices, in dollars, hours and minutes. */
export interface PlanPrices {
  readonly driveDollarsPerHour: number;
  /** For an ordinary call; food counts twice, medicine as its own setting says. */
  readonly waitDollarsPerHour: number;
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
