import type { AreaDto } from '@shared/contract/areas';
import type { Address, CompartmentFacts, UnitFacts } from '@shared/contract/calls';
import { COMPARTMENTS_OF, type CompartmentKind, type UnitKind } from '@shared/domain/cold-unit';
import type { Instant } from '@shared/domain/instant';
import { unknownCompartment } from '@shared/domain/unknown-compartment';

/** A call as far as it has been taken. It survives JSON, so that a reload loses nothing. */
export interface IntakeDraft {
  /** Made here and kept over every attempt to save, so that a repeat makes no second call. */
  readonly callId: string;
  readonly commandId: string;
  /** As typed. */
  readonly phone: string;
  readonly name: string;
  readonly address: Address;
  readonly language: 'en' | 'es';
  readonly mayText: boolean;
  readonly times: IntakeTimes;
  readonly units: readonly UnitFacts[];
  readonly remark: string;
  readonly danger: boolean;
}

export interface IntakeTimes {
  /** `area`: as the outage area says, and changing with it. */
  readonly from: 'area' | 'caller';
  /** As typed, for the field to show again. */
  readonly outText: string;
  readonly backText: string;
  readonly outAt: Instant | null;
  readonly backAt: Instant | null;
  readonly stillOut: boolean;
}

export const NO_ADDRESS: Address = { text: '', unitNo: '', lonLat: null, kind: 'unlocated' };

export function blankDraft(newId: () => string): IntakeDraft {
  return {
    callId: newId(),
    commandId: newId(),
    phone: '',
    name: '',
    address: NO_ADDRESS,
    language: 'en',
    mayText: true,
    times: {
      from: 'area',
      outText: '',
      backText: '',
      outAt: null,
      backAt: null,
      stillOut: false,
    },
    units: [],
    remark: '',
    danger: false,
  };
}

/** Whether anybody would miss the draft. */
export const isWorthKeeping = ({ phone, name, address, units, remark }: IntakeDraft): boolean =>
  phone !== '' || name !== '' || address.text !== '' || units.length > 0 || remark !== '';

/** The times that count: the outage area's until the caller says otherwise. */
export function timesInForce(times: IntakeTimes, area: AreaDto | null): IntakeTimes {
  if (times.from === 'caller' || !area) return { ...times, from: 'caller' };
  const { outAt, backAt } = area;
  return { from: 'area', outText: '', backText: '', outAt, backAt, stillOut: backAt === null };
}

/** A unit as it is added by its chip: what it is, and nothing else known yet. */
export function newUnit(kind: UnitKind, id: string): UnitFacts {
  return {
    id,
    kind,
    compressorStart: 'unknown',
    ageYears: null,
    cubicFeet: null,
    place: '',
    compartments: COMPARTMENTS_OF[kind].map((compartment) => newCompartment(compartment, kind)),
  };
}

export const newCompartment = (kind: CompartmentKind, unit: UnitKind): CompartmentFacts =>
  unknownCompartment(unit, kind, 'rather-not-say');

/** Medicine kept in an ordinary refrigerator has a clock of its own beside the food's. */
export function withMedicine(unit: UnitFacts, kept: boolean): UnitFacts {
  const others = unit.compartments.filter(({ kind }) => kind !== 'medicine');
  return {
    ...unit,
    compartments: kept ? [...others, newCompartment('medicine', unit.kind)] : others,
  };
}

export function changeUnit(
  units: readonly UnitFacts[],
  id: string,
  change: (unit: UnitFacts) => UnitFacts,
): UnitFacts[] {
  return units.map((unit) => (unit.id === id ? change(unit) : unit));
}

export function changeCompartment(
  unit: UnitFacts,
  kind: CompartmentKind,
  part: Partial<CompartmentFacts>,
): UnitFacts {
  return {
    ...unit,
    compartments: unit.compartments.map((compartment) =>
      compartment.kind === kind ? { ...compartment, ...part } : compartment,
    ),
  };
}

/** Whether something read from storage is a draft of this program. */
export function isIntakeDraft(value: unknown): value is IntakeDraft {
  if (typeof value !== 'object' || value === null) return false;
  const draft = value as Partial<Record<keyof IntakeDraft, unknown>>;
  return (
    typeof draft.callId === 'string' &&
    typeof draft.commandId === 'string' &&
    typeof draft.phone === 'string' &&
    typeof draft.name === 'string' &&
    typeof draft.remark === 'string' &&
    typeof draft.mayText === 'boolean' &&
    typeof draft.danger === 'boolean' &&
    (draft.language === 'en' || draft.language === 'es') &&
    Array.isArray(draft.units) &&
    isObject(draft.address) &&
    isObject(draft.times)
  );
}

const isObject = (value: unknown): boolean => typeof value === 'object' && value !== null;
