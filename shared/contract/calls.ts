import { z } from 'zod';
import { CALL_STATES, PHONE_OUTCOMES } from '../domain/call-state';
import {
  COMPARTMENT_KINDS,
  COMPRESSOR_STARTS,
  COOLING_NOW,
  DOOR_USES,
  INSPECTION_FINDINGS,
  MEDICINE_KINDS,
  RAN_BETWEEN,
  UNIT_KINDS,
} from '../domain/cold-unit';
import { PARTS, SKILLS } from '../domain/skills';
import {
  Cents,
  Command,
  Id,
  line,
  filledLine,
  LonLat,
  Moment,
  PhoneNumber,
  prose,
  Version,
  VersionedCommand,
} from './common';
import { MessageDto } from './messages';

/** How surely a place on the map is the address that the caller meant. */
export const ADDRESS_KINDS = [
  'rooftop',
  'interpolated',
  'corner',
  'street',
  'place',
  'pin',
  'unlocated',
] as const;

export const Address = z.strictObject({
  text: filledLine(160),
  /** Apartment, suite or lot; it stays with the call, not with the point. */
  unitNo: line(24),
  /** `null` while nobody knows where it is. */
  lonLat: LonLat.nullable(),
  kind: z.enum(ADDRESS_KINDS),
});
export type Address = z.infer<typeof Address>;

const degreesF = z.number().min(-60).max(150);

export const CompartmentFacts = z.strictObject({
  kind: z.enum(COMPARTMENT_KINDS),
  fill: z.number().min(0).max(1).nullable(),
  door: z.enum(DOOR_USES),
  standingOpenSince: Moment.nullable(),
  roomF: degreesF.nullable(),
  beforeF: degreesF.nullable(),
  readings: z.array(z.strictObject({ at: Moment, temperatureF: degreesF })).max(100),
  inspections: z
    .array(z.strictObject({ at: Moment, finding: z.enum(INSPECTION_FINDINGS) }))
    .max(100),
  dryIce: z
    .array(
      z.strictObject({
        at: Moment,
        pounds: z.number().positive().max(1000),
        cubicFeet: z.number().positive().max(5000),
      }),
    )
    .max(20),
  /** Ice or frozen packs put in. */
  ice: z
    .array(z.strictObject({ at: Moment }))
    .max(20)
    .default([]),
  medicine: z
    .strictObject({
      kind: z.enum(MEDICINE_KINDS),
      labelHours: z.number().positive().max(10_000).nullable(),
      labelMaxF: degreesF.nullable(),
      frozen: z.boolean(),
      hoursAlreadyUnrefrigerated: z.number().min(0).max(10_000),
    })
    .nullable(),
  coldAtLoss: z.boolean().nullable(),
  valueCents: Cents,
});
export type CompartmentFacts = z.infer<typeof CompartmentFacts>;

/** A unit as intake sends it; the client makes the ids, so that a repeat makes no second unit. */
export const UnitFacts = z.strictObject({
  id: Id,
  kind: z.enum(UNIT_KINDS),
  compressorStart: z.enum(COMPRESSOR_STARTS),
  ageYears: z.int().min(0).max(80).nullable(),
  cubicFeet: z.number().positive().max(5000).nullable(),
  /** Where it stands, in the caller's words. */
  place: line(60),
  /** What it does now, and whether it ran while the power was back for a while. */
  cooling: z.enum(COOLING_NOW).default('unknown'),
  ranBetween: z.enum(RAN_BETWEEN).default('unknown'),
  compartments: z.array(CompartmentFacts).min(1).max(4),
});
export type UnitFacts = z.infer<typeof UnitFacts>;

/** A compartment on the board: its clock is worked out once, on the server, from the facts. */
export const CompartmentRow = z.strictObject({
  kind: z.enum(COMPARTMENT_KINDS),
  valueCents: Cents,
  atRiskAt: Moment,
  /** From when they may have passed their temperature, and from when they likely have. */
  earliestAt: Moment,
  likelyAt: Moment.nullable(),
  /** `null`: software never declares these contents lost. */
  saveByAt: Moment.nullable(),
});
export type CompartmentRow = z.infer<typeof CompartmentRow>;

/** A window that a customer agreed to. */
export const AgreedWindow = z.strictObject({ from: Moment, to: Moment });

/** A call as every board shows it. */
export const CallRow = z.strictObject({
  id: Id,
  stormId: Id,
  /** What people say aloud: "call 214". Counts from 1 within a storm. */
  number: z.int().positive(),
  state: z.enum(CALL_STATES),
  version: Version,
  receivedAt: Moment,
  settledAt: Moment.nullable(),
  name: z.string(),
  phone: PhoneNumber.nullable(),
  address: Address,
  areaId: Id.nullable(),
  /** When cooling stopped: the earliest plausible moment. */
  lostAt: Moment,
  restoredAt: Moment.nullable(),
  units: z.array(
    z.strictObject({ id: Id, kind: z.enum(UNIT_KINDS), compartments: z.array(CompartmentRow) }),
  ),
  skills: z.array(z.enum(SKILLS)),
  parts: z.array(z.enum(PARTS)),
  /** Who is working on it now, and until when unless they go on. */
  claim: z.strictObject({ userId: Id, name: z.string(), until: Moment }).nullable(),
  technicianId: Id.nullable(),
  etaAt: Moment.nullable(),
  /** A safety answer stopped the phone check, or the log's words spoke of danger. */
  danger: z.boolean(),
  /** Somebody there can do less without than others; who and why is not asked. */
  householdAtRisk: z.boolean(),
  /** Texts from the customer that nobody has read. */
  unreadTexts: z.int().nonnegative(),
  /** No technician can drive there now: every road is closed or flooded. */
  cutOff: z.boolean(),
  /** When the customer agreed that the visit begins; left out when nothing was agreed. */
  window: AgreedWindow.optional(),
  source: z.enum(['phone', 'night-log', 'customer']),
});
export type CallRow = z.infer<typeof CallRow>;

/** The power was back for so long and then went again. */
export const PowerOnSpan = z
  .strictObject({ from: Moment, to: Moment })
  .refine(({ from, to }) => from < to, 'It came back before it went again.');
const powerOnSpans = z.array(PowerOnSpan).max(6);

export const TIME_SOURCES = ['area', 'caller'] as const;

/** Everything about one call, for the person who works on it. */
export const CallDetail = z.strictObject({
  row: CallRow,
  language: z.enum(['en', 'es']),
  mayText: z.boolean(),
  powerOutAt: Moment,
  powerBackAt: Moment.nullable(),
  /** When the power was back for a while between the two. */
  powerOnSpans,
  /** Whether the times follow the outage area or were given by the caller. */
  timesFrom: z.enum(TIME_SOURCES),
  units: z.array(UnitFacts),
  /** In words, per unit and compartment, why the clocks stand where they stand. */
  clockReasons: z.array(z.array(z.array(z.string()))),
  phoneCheck: z.strictObject({
    answers: z.record(z.string(), z.union([z.string(), z.number()])),
    startedAt: Moment.nullable(),
    concludedAt: Moment.nullable(),
  }),
  remarks: z.array(z.strictObject({ at: Moment, by: z.string(), text: z.string() })),
  history: z.array(
    z.strictObject({
      at: Moment,
      from: z.enum(CALL_STATES).nullable(),
      to: z.enum(CALL_STATES),
      by: z.string(),
      reason: z.string(),
    }),
  ),
  messages: z.array(MessageDto),
});
export type CallDetail = z.infer<typeof CallDetail>;

export const TakeCall = Command.extend({
  callId: Id,
  phone: PhoneNumber,
  name: filledLine(120),
  address: Address,
  language: z.enum(['en', 'es']),
  mayText: z.boolean(),
  powerOutAt: Moment,
  powerBackAt: Moment.nullable(),
  powerOnSpans: powerOnSpans.default([]),
  timesFrom: z.enum(TIME_SOURCES),
  householdAtRisk: z.boolean().default(false),
  units: z.array(UnitFacts).min(1).max(12),
  remark: prose(2000),
  danger: z.boolean(),
});
export type TakeCall = z.infer<typeof TakeCall>;

export const AmendCall = VersionedCommand.extend({
  name: filledLine(120).optional(),
  phone: PhoneNumber.optional(),
  address: Address.optional(),
  language: z.enum(['en', 'es']).optional(),
  mayText: z.boolean().optional(),
  powerOutAt: Moment.optional(),
  powerBackAt: Moment.nullable().optional(),
  powerOnSpans: powerOnSpans.optional(),
  householdAtRisk: z.boolean().optional(),
  timesFrom: z.enum(TIME_SOURCES).optional(),
  units: z.array(UnitFacts).min(1).max(12).optional(),
});
export type AmendCall = z.infer<typeof AmendCall>;

export const AnswerPhoneCheck = VersionedCommand.extend({
  /** By question; of a call's other units by question, `@` and the unit's id. */
  answers: z.record(z.string().max(60), z.union([z.string().max(40), z.number()])),
});
export type AnswerPhoneCheck = z.infer<typeof AnswerPhoneCheck>;

/** Ends the phone check: settled by phone, or in need of a visit. */
export const ConcludeCall = VersionedCommand.extend({
  outcome: z.enum([...PHONE_OUTCOMES, 'waiting']),
  reason: line(300),
  /** With `duplicate`: the call that stays. */
  duplicateOfId: Id.optional(),
});
export type ConcludeCall = z.infer<typeof ConcludeCall>;

export const ReturnToWaiting = VersionedCommand.extend({
  reason: filledLine(300),
  /** When the next visit is to begin, as agreed with the customer. */
  window: AgreedWindow.optional(),
});
export const AddRemark = Command.extend({ text: prose(2000).pipe(z.string().min(1)) });

/** What is known of whoever rings, from the phone number alone. */
export const HouseholdFound = z.strictObject({
  household: z
    .strictObject({
      id: Id,
      name: z.string(),
      phone: PhoneNumber,
      address: Address,
      language: z.enum(['en', 'es']),
      mayText: z.boolean(),
      optedOut: z.boolean(),
    })
    .nullable(),
  openCall: CallRow.nullable(),
  earlierCalls: z.int().nonnegative(),
});
export type HouseholdFound = z.infer<typeof HouseholdFound>;

export const AddressSuggestion = z.strictObject({
  label: z.string(),
  unitNo: z.string(),
  lonLat: LonLat,
  kind: z.enum(ADDRESS_KINDS),
  /** 0 to 1. */
  confidence: z.number(),
});
export type AddressSuggestion = z.infer<typeof AddressSuggestion>;
