import { z } from 'zod';

/** What things cost in a plan; a manager may try others before they are set. */
export const PlanPrices = z.strictObject({
  driveDollarsPerHour: z.number().min(0).max(500),
  /** For an ordinary call; food counts twice. */
  waitDollarsPerHour: z.number().min(0).max(100),
  /** Of a visit that begins after the window that the customer was told. */
  lateDollars: z.number().min(0).max(1000),
  lateDollarsPerHour: z.number().min(0).max(1000),
  overtimeDollarsPerHour: z.number().min(0).max(1000),
  mostOvertimeMinutes: z.int().min(0).max(240),
  /** Of a call on no route, on top of what is lost there. */
  leftOutDollars: z.number().min(0).max(5000),
  /** Of a stop soon to come that changes its technician, or its time by more than so many minutes. */
  otherTechnicianDollars: z.number().min(0).max(500),
  otherTimeDollars: z.number().min(0).max(500),
  otherTimeMinutes: z.int().min(5).max(240),
  promisedAheadMinutes: z.int().min(0).max(720),
  /** How much more a medicine counts than its money value. */
  medicineWeight: z.number().min(1).max(100),
  /** How much more everything counts in a household that can do less without. */
  householdWeight: z.number().min(1).max(10),
  /** Changes of a technician's stops by publications within an hour; then those soon to come stay. */
  changesPerHour: z.int().min(0).max(99),
});
export type PlanPrices = z.infer<typeof PlanPrices>;
