import { z } from 'zod';
import { VISIT_OUTCOMES, CALL_STATES } from '../domain/call-state';
import { UNIT_KINDS } from '../domain/cold-unit';
import { PARTS, SKILLS } from '../domain/skills';
import { Address, CompartmentRow } from './calls';
import { PlanPrices } from './plan-prices';
import {
  Command,
  filledLine,
  Id,
  line,
  LonLat,
  Moment,
  PhoneNumber,
  prose,
  Version,
  VersionedCommand,
} from './common';

/** A pause of so many minutes that begins between two moments. */
export const ShiftBreak = z.strictObject({
  from: Moment,
  to: Moment,
  minutes: z.int().min(5).max(180),
});
export const Shift = z.strictObject({
  startsAt: Moment,
  endsAt: Moment,
  /** Left out when there are none. */
  breaks: z.array(ShiftBreak).max(3).optional(),
});

export const Position = z.strictObject({
  lonLat: LonLat,
  at: Moment,
  accuracyMeters: z.number().nonnegative().nullable(),
});
export type Position = z.infer<typeof Position>;

export const TechnicianDto = z.strictObject({
  id: Id,
  name: z.string(),
  phone: PhoneNumber,
  skills: z.array(z.enum(SKILLS)),
  /** Parts on the van and how many. */
  van: z.partialRecord(z.enum(PARTS), z.int().nonnegative()),
  start: LonLat,
  shifts: z.array(Shift),
  position: Position.nullable(),
  active: z.boolean(),
  version: Version,
});
export type TechnicianDto = z.infer<typeof TechnicianDto>;

export const AddTechnician = Command.extend({
  technicianId: Id,
  name: filledLine(80),
  phone: PhoneNumber,
  skills: z.array(z.enum(SKILLS)),
  van: z.partialRecord(z.enum(PARTS), z.int().min(0).max(99)),
  start: LonLat,
  shifts: z.array(Shift).max(30),
});
export const ChangeTechnician = VersionedCommand.extend({
  name: filledLine(80).optional(),
  phone: PhoneNumber.optional(),
  skills: z.array(z.enum(SKILLS)).optional(),
  van: z.partialRecord(z.enum(PARTS), z.int().min(0).max(99)).optional(),
  start: LonLat.optional(),
  shifts: z.array(Shift).max(30).optional(),
  active: z.boolean().optional(),
});

/** `pulled`, `declined` and `done` stops are history; the others make up the route. */
export const STOP_STATES = [
  'planned',
  'offered',
  'accepted',
  'travelling',
  'on-site',
  'done',
  'declined',
  'pulled',
] as const;

export const StopDto = z.strictObject({
  id: Id,
  stormId: Id,
  technicianId: Id,
  callId: Id,
  /** Order on the route, from 0. */
  position: z.int().nonnegative(),
  state: z.enum(STOP_STATES),
  locked: z.boolean(),
  arriveAt: Moment,
  finishAt: Moment,
  etaAt: Moment.nullable(),
  driveMinutes: z.number().nonnegative(),
  /** No open road leads from the stop before to this one; its times are those of before. */
  isUnreachable: z.boolean(),
  /** Why it has this place, in words. */
  because: z.string(),
  /** Parts that the van fetches at the company's store on the way to it; left out when there are none. */
  fetches: z.partialRecord(z.enum(PARTS), z.int().positive()).optional(),
  version: Version,
});
export type StopDto = z.infer<typeof StopDto>;

/** A stop as the technician's phone shows it: only what the visit needs. */
export const StopCard = z.strictObject({
  stop: StopDto,
  callNumber: z.int(),
  callState: z.enum(CALL_STATES),
  name: z.string(),
  phone: PhoneNumber.nullable(),
  address: Address,
  lostAt: Moment,
  units: z.array(
    z.strictObject({
      id: Id,
      kind: z.enum(UNIT_KINDS),
      place: z.string(),
      compartments: z.array(CompartmentRow),
    }),
  ),
  skills: z.array(z.enum(SKILLS)),
  parts: z.array(z.enum(PARTS)),
  /** Likely causes from the phone check, likeliest first, in words. */
  causes: z.array(z.string()),
  remarks: z.array(z.string()),
  danger: z.boolean(),
});
export type StopCard = z.infer<typeof StopCard>;

export const TechnicianDay = z.strictObject({
  stormId: Id.nullable(),
  n: z.int().nonnegative(),
  technician: TechnicianDto,
  stops: z.array(StopCard),
});
export type TechnicianDay = z.infer<typeof TechnicianDay>;

export const PlanFigures = z.strictObject({
  savedCents: z.int(),
  lostCents: z.int(),
  driveMinutes: z.number(),
  driveMiles: z.number(),
  lateMinutes: z.number(),
  stops: z.int(),
  /** Plans of an earlier version do not say these. */
  overtimeMinutes: z.number().optional(),
  waitHours: z.number().optional(),
  leftOut: z.int().optional(),
  /** Stops with another technician, or a start that moves by more than 30 minutes. */
  moved: z.int(),
});
export type PlanFigures = z.infer<typeof PlanFigures>;

/** What one technician's route does. */
export const RouteFigures = z.strictObject({
  savedCents: z.int(),
  driveMinutes: z.number(),
  driveMiles: z.number(),
  lateMinutes: z.number(),
  overtimeMinutes: z.number(),
});
export type RouteFigures = z.infer<typeof RouteFigures>;

export const PlanDto = z.strictObject({
  id: Id,
  stormId: Id,
  state: z.enum(['proposed', 'published', 'discarded', 'overtaken']),
  proposedAt: Moment,
  proposedBy: z.string(),
  routes: z.array(
    z.strictObject({
      technicianId: Id,
      stops: z.array(
        z.strictObject({
          callId: Id,
          arriveAt: Moment,
          startAt: Moment,
          finishAt: Moment,
          driveMinutes: z.number(),
          firm: z.boolean(),
          because: z.string(),
          /** Parts that are fetched at the store on the way to it; left out when there are none. */
          fetches: z.partialRecord(z.enum(PARTS), z.int().positive()).optional(),
          /** What putting it here gains over leaving it as it was; only of stops that are new here. */
          gainCents: z.int().optional(),
        }),
      ),
      /** Breaks and the stop at the store; left out when there are none. */
      halts: z
        .array(
          z.strictObject({ kind: z.enum(['break', 'shop']), startAt: Moment, finishAt: Moment }),
        )
        .optional(),
      /** What this route does; plans of an earlier version do not say it. */
      figures: RouteFigures.optional(),
      /** How many of this technician's stops in force it changes. */
      changes: z.int().optional(),
    }),
  ),
  unplanned: z.array(
    z.strictObject({
      callId: Id,
      reason: z.enum(['skill', 'part', 'no-shift', 'capacity', 'unlocated', 'cut-off']),
      words: z.string(),
      /** What would bring it on a route, as tried; left out when nothing was found. */
      help: z.array(z.string()).optional(),
    }),
  ),
  figures: PlanFigures,
  /** The same figures for the routes in force, to compare. */
  inForce: PlanFigures,
  /** How much lower the price of the plan is than that of the routes in force, changes counted. */
  gainCents: z.int().optional(),
  /** Of a plan that was made by itself: what brought it about, and why it was not published. */
  automatic: z.strictObject({ because: z.string(), heldBack: z.string().nullable() }).optional(),
  /** Where its drives come from, in words; plans of an earlier version do not say it. */
  drivesFrom: z.string().optional(),
  version: Version,
});
export type PlanDto = z.infer<typeof PlanDto>;

export const ProposePlan = Command.extend({
  planId: Id,
  /** How long to search, in seconds of one core. */
  seconds: z.number().min(0.05).max(10).default(1),
});
/** Plans with other prices than those that are set, and keeps nothing of it. */
export const TryPrices = z.strictObject({
  seconds: z.number().min(0.05).max(5).default(1),
  prices: PlanPrices.partial(),
});
export const PlanTrialDto = z.strictObject({
  inForce: PlanFigures,
  /** A plan by the settings, and one by the prices that were tried, from the same facts and moment. */
  asSet: PlanFigures,
  tried: PlanFigures,
  /** Calls that only one of the two puts on a route. */
  onlyAsSet: z.array(Id),
  onlyTried: z.array(Id),
});
export type PlanTrialDto = z.infer<typeof PlanTrialDto>;
export const PublishPlan = VersionedCommand;
export const DiscardPlan = VersionedCommand;

export const LockStop = VersionedCommand.extend({ locked: z.boolean() });
export const MoveStop = VersionedCommand.extend({
  technicianId: Id,
  /** Place on the route, from 0, counting every stop that is still to be done. */
  position: z.int().min(0).max(200),
});
export const PullStop = VersionedCommand.extend({ reason: filledLine(300) });
/** Gives a waiting call to a technician by hand. */
export const AddStop = VersionedCommand.extend({
  stopId: Id,
  technicianId: Id,
  position: z.int().min(0).max(200),
});

export const DECLINE_REASONS = [
  'missing-part',
  'missing-skill',
  'road-closed',
  'unsafe',
  'end-of-shift',
  'other',
] as const;
export const AcceptStop = VersionedCommand;
export const DeclineStop = VersionedCommand.extend({
  reason: z.enum(DECLINE_REASONS),
  note: line(300),
});
export const StartTravel = VersionedCommand.extend({ from: LonLat.nullable() });
export const TellEta = VersionedCommand.extend({ etaAt: Moment });
export const Arrive = VersionedCommand;
export const FinishStop = VersionedCommand.extend({
  outcome: z.enum(VISIT_OUTCOMES),
  note: prose(2000),
  partsUsed: z.array(z.enum(PARTS)).max(20),
});
export const ReportPosition = z.strictObject({ position: Position });
