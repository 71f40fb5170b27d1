import type { AreaDto } from '@shared/contract/areas';
import type { Address, CompartmentFacts, UnitFacts } from '@shared/contract/calls';
import { COMPARTMENTS_OF, type CompartmentKind, type UnitKind } from '@shared/domain/cold-unit';
import type { Instant } from '@shared/domain/instant';
import type { Span } from '@shared/domain/thaw/uncooled-time';
import { DEFAULT_VALUES, usualValueCents, type UsualValues } from '@shared/domain/food-value';
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
  /** When the power was back for a while. */
  readonly powerOnSpans: readonly Span[];
  readonly householdAtRisk: boolean;
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
    powerOnSpans: [],
    householdAtRisk: false,
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
export function newUnit(
  kind: UnitKind,
  id: string,
  values: UsualValues = DEFAULT_VALUES,
): UnitFacts {
  return {
    id,
    kind,
    compressorStart: 'unknown',
    ageYears: null,
    cubicFeet: null,
    place: '',
    cooling: 'unknown',
    ranBetween: 'unknown',
    compartments: COMPARTMENTS_OF[kind].map((compartment) =>
      newCompartment(compartment, kind, values),
    ),
  };
}

export const newCompartment = (
  kind: CompartmentKind,
  unit: UnitKind,
  values: UsualValues = DEFAULT_VALUES,
): CompartmentFacts => unknownCompartment(unit, kind, 'rather-not-say', values);

/**
 * A unit as it was changed, its contents worth what such a unit's usually are; but a worth that somebody
 * gave, or gives now, stays.
 */
export function withUsualValues(
  before: UnitFacts,
  after: UnitFacts,
  values: UsualValues,
): UnitFacts {
  return {
    ...after,
    compartments: after.compartments.map((one) => {
      const was = before.compartments.find(({ kind }) => kind === one.kind);
      const isUsual = was?.valueCents === (was && usualValueCents(before, was, values));
      const isGiven = was?.valueCents !== one.valueCents;
      if (!was || !isUsual || isGiven) return one;
      return { ...one, valueCents: usualValueCents(after, one, values) };
    }),
  };
}

/** Medicine kept in an ordinary refrigerator has a clock of its own beside the food's. */
export function withMedicine(
  unit: UnitFacts,
  kept: boolean,
  values: UsualValues = DEFAULT_VALUES,
): UnitFacts {
  const others = unit.compartments.filter(({ kind }) => kind !== 'medicine');
  return {
    ...unit,
    compartments: kept ? [...others, newCompartment('medicine', unit.kind, values)] : others,
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

/** A draft that was kept before some of these things were asked: they are not known. */
export function wholeDraft(kept: IntakeDraft): IntakeDraft {
  const { powerOnSpans = [], householdAtRisk = false } = kept as Partial<IntakeDraft>;
  const units = kept.units.map((unit): UnitFacts => {
    const { cooling = 'unknown', ranBetween = 'unknown' } = unit as Partial<UnitFacts>;
    const compartments = unit.compartments.map((one) => ({ ...one, ice: withIce(one) }));
    return { ...unit, cooling, ranBetween, compartments };
  });
  return { ...kept, powerOnSpans, householdAtRisk, units };
}

const withIce = ({ ice = [] }: Partial<Pick<CompartmentFacts, 'ice'>>): CompartmentFacts['ice'] =>
  ice;

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
