import { z } from 'zod';
import { ROAD_CLASSES } from '../domain/roads/road-class';
import {
  Command,
  filledLine,
  Id,
  LonLat,
  Moment,
  PhoneNumber,
  Role,
  Version,
  VersionedCommand,
} from './common';
import { RegionDto } from './areas';
import { PlanPrices } from './plan-prices';

export const SignInName = z.string().trim().toLowerCase().max(120).pipe(z.email());

/**
 * A password. At least 15 characters, no rules of composition, long ones welcome
 * (NIST SP 800-63B-4, 2025, single-factor passwords).
 */
export const Password = z.string().min(15).max(200);

export const SignIn = z.strictObject({
  signInName: z.string().max(200),
  password: z.string().max(500),
});

export const UserDto = z.strictObject({
  id: Id,
  name: z.string(),
  signInName: z.string(),
  role: Role,
  technicianId: Id.nullable(),
  disabled: z.boolean(),
  mustChangePassword: z.boolean(),
  version: Version,
});
export type UserDto = z.infer<typeof UserDto>;

export const StormDto = z.strictObject({
  id: Id,
  name: z.string(),
  state: z.enum(['open', 'closed']),
  openedAt: Moment,
  closedAt: Moment.nullable(),
  version: Version,
});
export type StormDto = z.infer<typeof StormDto>;

export const OpenStorm = Command.extend({ stormId: Id, name: filledLine(80) });
export const CloseStorm = VersionedCommand;

/** What routes do by themselves: nothing, proposals, or publications within limits. */
export const AUTOMATIC_MODES = ['off', 'propose', 'publish'] as const;

const SpeedPercent = z.int().min(40).max(130);

const Dollars = z.int().min(0).max(100_000);

export const Settings = z.strictObject({
  companyName: z.string(),
  companyPhone: z.string(),
  /** A text goes out when an arrival time moves by more than this. */
  etaMovedMinutes: z.int().min(5).max(180),
  /** Minutes after midnight, in the region's time. */
  quietFromMinute: z.int().min(0).max(1439),
  quietUntilMinute: z.int().min(0).max(1439),
  claimMinutes: z.int().min(2).max(60),
  /** Road distance over straight-line distance. */
  circuity: z.number().min(1).max(3),
  speedMph: z.number().min(5).max(80),
  /** How fast roads are driven at each time of day and in a storm, of their usual speed. */
  morningPercent: SpeedPercent,
  dayPercent: SpeedPercent,
  eveningPercent: SpeedPercent,
  nightPercent: SpeedPercent,
  stormPercent: z.int().min(30).max(100),
  /** Whether measured drives correct the speeds of the road classes, and from when on they count. */
  usesMeasuredSpeeds: z.boolean(),
  measuredFrom: Moment.nullable(),
  serviceMinutes: z.int().min(5).max(480),
  /** What each further unit of a call adds, of the time at the first. */
  furtherUnitPercent: z.int().min(0).max(100),
  /** Whether finished visits correct the time at a stop, by cause and by technician. */
  usesMeasuredVisits: z.boolean(),
  /** The company's store, where vans fetch parts that they lack; `null`: nothing is fetched. */
  shopPlace: LonLat.nullable(),
  shopMinutes: z.int().min(1).max(120),
  ...PlanPrices.shape,
  automaticRoutes: z.enum(AUTOMATIC_MODES),
  /** A change that gains less stays undone. */
  automaticGainDollars: z.number().min(0).max(10_000),
  /** Nothing that begins within so many minutes is moved by the automatic mode. */
  automaticKeepMinutes: z.int().min(0).max(480),
  /** Minutes until somebody could be at a door; urgency is what is lost around that moment. */
  reachMinutes: z.int().min(0).max(1440),
  /** What contents are worth until somebody says otherwise, in dollars, three quarters full. */
  valueFreshFood: Dollars,
  valueFreezerSection: Dollars,
  valueUprightFreezer: Dollars,
  valueChestFreezer: Dollars,
  valueMedicine: Dollars,
  valueStock: Dollars,
  pocketKm: z.number().min(0.1).max(10),
  pocketCalls: z.int().min(2).max(50),
  version: Version,
});
export type Settings = z.infer<typeof Settings>;
export const ChangeSettings = VersionedCommand.extend({
  ...Settings.omit({ version: true }).partial().shape,
  companyName: filledLine(80).optional(),
  companyPhone: PhoneNumber.optional(),
});

/** What measured drives say of each class of road. */
export const MeasuredSpeedsDto = z.strictObject({
  /** `null`: all drives count that were ever measured. */
  since: Moment.nullable(),
  isUsed: z.boolean(),
  drives: z.int(),
  /** Drives that tell nothing, and why, most frequent first. */
  leftOut: z.array(z.strictObject({ why: z.string(), drives: z.int() })),
  classes: z.array(
    z.strictObject({
      roadClass: z.enum(ROAD_CLASSES),
      /** Weighed by what share of each drive was on this class. */
      drives: z.number(),
      /** Multiplies the class's speed. */
      factor: z.number(),
      usualKmh: z.number(),
    }),
  ),
});
export type MeasuredSpeedsDto = z.infer<typeof MeasuredSpeedsDto>;
export const ResetMeasuredSpeeds = VersionedCommand;

const VisitFactor = z.strictObject({
  name: z.string(),
  visits: z.int(),
  /** Times the time that was expected. */
  factor: z.number(),
});
/** What finished visits say of the time at a stop. */
export const MeasuredVisitsDto = z.strictObject({
  isUsed: z.boolean(),
  visits: z.int(),
  /** Visits that tell nothing, and why. */
  leftOut: z.array(z.strictObject({ why: z.string(), visits: z.int() })),
  serviceMinutes: z.number(),
  all: VisitFactor,
  byCause: z.array(VisitFactor),
  byTechnician: z.array(VisitFactor),
});
export type MeasuredVisitsDto = z.infer<typeof MeasuredVisitsDto>;

/** Who is signed in and what every screen needs to know first. */
export const Me = z.strictObject({
  user: UserDto,
  storm: StormDto.nullable(),
  region: RegionDto,
  settings: Settings,
  serverNow: Moment,
  /** The server was started as a demo: its people, and the storm that it opened, are invented. */
  isDemo: z.boolean().optional(),
});
export type Me = z.infer<typeof Me>;
export const MaybeMe = z.strictObject({ me: Me.nullable() });
export type MaybeMe = z.infer<typeof MaybeMe>;

export const AddUser = Command.extend({
  userId: Id,
  name: filledLine(80),
  signInName: SignInName,
  role: Role,
  technicianId: Id.nullable(),
});
export const ChangeUser = VersionedCommand.extend({
  name: filledLine(80).optional(),
  role: Role.optional(),
  technicianId: Id.nullable().optional(),
  disabled: z.boolean().optional(),
});
export const ResetPassword = VersionedCommand;
/** The password is shown once and must be changed at the first sign-in. */
export const UserWithPassword = z.strictObject({ user: UserDto, password: z.string() });
export const ChangePassword = z.strictObject({
  current: z.string().max(500),
  next: Password,
  endOtherSessions: z.boolean(),
});

const DrainPoint = z.strictObject({
  at: Moment,
  arrivals: z.int(),
  settledByPhone: z.int(),
  settledByVisit: z.int(),
  open: z.int(),
  valueAtRiskCents: z.int(),
  savedCents: z.int(),
  lostCents: z.int(),
});
const DrainShare = z.strictObject({
  id: Id.nullable(),
  name: z.string(),
  arrivals: z.int(),
  settledByPhone: z.int(),
  settledByVisit: z.int(),
  open: z.int(),
  valueAtRiskCents: z.int(),
  savedCents: z.int(),
  lostCents: z.int(),
});
export const DrainDto = z.strictObject({
  at: Moment,
  bucketMinutes: z.int(),
  /** Running totals at the end of each bucket. */
  series: z.array(DrainPoint),
  byArea: z.array(DrainShare),
  byTechnician: z.array(DrainShare),
});
export type DrainDto = z.infer<typeof DrainDto>;

export const AuditEntryDto = z.strictObject({
  n: z.int(),
  at: Moment,
  by: z.string(),
  command: z.string(),
  entity: z.string(),
  entityId: z.string(),
  summary: z.string(),
});
export type AuditEntryDto = z.infer<typeof AuditEntryDto>;
