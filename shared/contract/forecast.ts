import { z } from 'zod';
import { PARTS } from '../domain/skills';
import { Id, Moment } from './common';

const band = <T extends z.ZodType>(value: T) =>
  z.strictObject({ low: value, middle: value, high: value });
const NumberBand = band(z.number());

/** Four of five futures lie between low and high. */
export const OutlookDto = z.strictObject({
  /** `null`: later than one looks ahead. */
  emptyAt: band(Moment.nullable()),
  /** Share of the futures in which the backlog is empty before `until`, 0 to 1. */
  emptyShare: z.number(),
  until: Moment,
  curve: z.array(z.strictObject({ at: Moment, open: NumberBand })),
  /** Lost from now on until the backlog is empty. */
  lostCents: NumberBand,
  /** Households whose medicine is lost from now on. */
  medicineLost: NumberBand,
  /** Calls still to come. */
  arrivals: NumberBand,
  futures: z.int(),
});
export type OutlookDto = z.infer<typeof OutlookDto>;

export const PhoneStaffingDto = z.strictObject({
  staff: z.int(),
  /** Share of the time that each of them speaks; 1 and more is too much. */
  occupancy: z.number(),
  /** `null`: the line grows without end. */
  waitSeconds: z.number().nullable(),
  within20: z.number(),
  within60: z.number(),
  /** The wait in one future of ten, when calls come thickest. */
  busyWaitSeconds: z.number().nullable(),
});

export const ForecastDto = z.strictObject({
  at: Moment,
  outlook: OutlookDto,
  phone: z.strictObject({
    staffNow: z.int(),
    /** In the busiest of the next twelve hours. */
    callsPerHour: NumberBand,
    handleMinutes: NumberBand,
    staffing: z.array(PhoneStaffingDto),
  }),
  /** What it rests on, in words. */
  restsOn: z.array(z.string()),
});
export type ForecastDto = z.infer<typeof ForecastDto>;

/** A change of the crew to try; nothing is changed by asking. */
export const WhatIf = z.strictObject({
  technicians: z.int().min(-30).max(30),
  overtimeHours: z.number().min(0).max(8),
  secondShift: z.int().min(0).max(30),
  phoneStaff: z.int().min(-20).max(20),
  partsOnEachVan: z.int().min(0).max(20),
});
export type WhatIf = z.infer<typeof WhatIf>;

export const WhatIfDto = z.strictObject({
  at: Moment,
  change: WhatIf,
  asItIs: OutlookDto,
  changed: OutlookDto,
  /** The change's own doing, future by future; below zero is sooner and less. */
  difference: z.strictObject({
    emptyHours: NumberBand,
    lostCents: NumberBand,
    medicineLost: NumberBand,
    openAtEnd: NumberBand,
    soonerShare: z.number(),
  }),
  elapsedMs: z.number(),
});
export type WhatIfDto = z.infer<typeof WhatIfDto>;

const PartAhead = z.strictObject({
  part: z.enum(PARTS),
  onVan: z.int(),
  expected: z.number(),
  /** The chance that the stops need more than is on the van, 0 to 1. */
  lackChance: z.number(),
  load: z.int(),
});
export const PartsAheadDto = z.strictObject({
  at: Moment,
  /** The stops that count: those that begin before this. */
  until: Moment,
  /** What the loads make of each chance to lack a part. */
  mostLackChance: z.number(),
  vans: z.array(
    z.strictObject({
      technicianId: Id,
      name: z.string(),
      stops: z.int(),
      lackChance: z.number(),
      parts: z.array(PartAhead),
    }),
  ),
  shelf: z.array(
    z.strictObject({
      part: z.enum(PARTS),
      onRoutes: z.number(),
      waiting: z.number(),
      onVans: z.int(),
      load: z.int(),
    }),
  ),
  waitingCalls: z.int(),
});
export type PartsAheadDto = z.infer<typeof PartsAheadDto>;
