import type { Instant } from '../instant';
import type { WorkShift } from '../route-rules';
import type { RingingArea } from './area-rings';

/** What is in a compartment and until when. */
export interface AtStake {
  readonly valueCents: number;
  /** Null: no rule ever says that it is lost. */
  readonly saveByAt: Instant | null;
  readonly isMedicine: boolean;
}

/** The chance that a visit needs each part, by the part's number; those without are left out. */
export type PartChances = readonly (readonly [part: number, chance: number])[];

/** Where an open call stands: on the phone or in the line to it, to be visited, or parked. */
export type OpenStage = 'phone' | 'visit' | 'parts-on-order' | 'no-access';

export interface ForecastCall {
  readonly receivedAt: Instant;
  readonly stage: OpenStage;
  /** Since when somebody has been checking it by phone; null while it is in line. */
  readonly checkingSince: Instant | null;
  readonly compartments: readonly AtStake[];
  /** Bits of the skills that a visit asks for. */
  readonly skills: number;
  readonly parts: PartChances;
  /** How many usual visits its own is expected to take: more for several units, or by its likely cause. */
  readonly workTimes?: number;
}

/** What was seen of a call, as a pattern for those to come: hours count from when it came in. */
export interface CallPattern {
  readonly compartments: readonly {
    readonly valueCents: number;
    readonly hoursLeft: number | null;
    readonly isMedicine: boolean;
  }[];
  readonly skills: number;
  readonly parts: PartChances;
  /** How many calls it counts as; 1 for one that was seen. */
  readonly weight: number;
}

export interface ForecastTechnician {
  readonly id: string;
  /** Not over yet, in their order. */
  readonly shifts: readonly WorkShift[];
  readonly skills: number;
  /** Times at the door against those of the others, as learned from visits; 1 while nothing is known. */
  readonly pace?: number;
  /** How many of each part, by the part's number. */
  readonly van: readonly number[];
  /** The stops in force, as numbers of calls. The first may be under way. */
  readonly route: readonly number[];
  /** The stop under way: driving since, or at the door since. */
  readonly underWay: {
    readonly drivingSince: Instant | null;
    readonly atDoorSince: Instant | null;
  } | null;
}

/** The state of a storm, and what it has shown so far of how things go. */
export interface ForecastFacts {
  readonly now: Instant;
  /** Since when calls have been taken. */
  readonly since: Instant;
  readonly zoneOffsetMs: number;
  readonly calls: readonly ForecastCall[];
  readonly patterns: readonly CallPattern[];
  /** What settled calls will still lose, since no cooling came back with their settlement. */
  readonly stillToLose: readonly (readonly AtStake[])[];
  readonly areas: readonly RingingArea[];
  /** Calls of no area. */
  readonly otherRingsAt: readonly Instant[];
  readonly technicians: readonly ForecastTechnician[];
  readonly phone: {
    readonly staff: number;
    readonly settledRunning: number;
    readonly settledOtherwise: number;
    readonly toVisit: number;
    readonly handleMinutes: readonly number[];
  };
  readonly visits: {
    /** What the settings, earlier visits, plans in force and roads say, until visits have been measured. */
    readonly usualServiceMinutes: number;
    readonly usualDriveMinutes: number;
    readonly serviceMinutes: readonly number[];
    readonly driveMinutes: readonly number[];
    readonly restored: number;
    readonly settledOtherwise: number;
    readonly noAccess: number;
    readonly partsOnOrder: number;
  };
  /** Calls that ended by themselves while they waited, and the hours that all calls have waited. */
  readonly waiting: { readonly ended: number; readonly hours: number };
  /** Whether anybody keeps count of what is on the vans. */
  readonly hasVanStock: boolean;
  /** The company's store: minutes for a stop there. Left out where there is none. */
  readonly store?: { readonly minutes: number };
}
