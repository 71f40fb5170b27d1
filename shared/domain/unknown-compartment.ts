import type {
  CompartmentFacts,
  CompartmentKind,
  DryIce,
  Ice,
  Inspection,
  MedicineKind,
  Reading,
  UnitKind,
} from './cold-unit';
import { DEFAULT_VALUES, defaultValueCents, type UsualValues } from './food-value';

/**
 * A compartment of which only its kind has been told: everything else is unknown, and each rule
 * takes the cautious reading of that. Its worth, in US cents, is the usual one for such a unit.
 *
 * @param medicine what to suppose of a medicine compartment until somebody says more
 * @param values what the manager counts for a usual unit
 */
export const unknownCompartment = (
  unit: UnitKind,
  kind: CompartmentKind,
  medicine: MedicineKind,
  values: UsualValues = DEFAULT_VALUES,
) =>
  ({
    kind,
    fill: null,
    door: 'unknown',
    standingOpenSince: null,
    roomF: null,
    beforeF: null,
    readings: [] as Reading[],
    inspections: [] as Inspection[],
    dryIce: [] as DryIce[],
    ice: [] as Ice[],
    medicine:
      kind === 'medicine'
        ? {
            kind: medicine,
            labelHours: null,
            labelMaxF: null,
            frozen: false,
            hoursAlreadyUnrefrigerated: 0,
          }
        : null,
    coldAtLoss: null,
    valueCents: defaultValueCents(unit, kind, values),
  }) satisfies CompartmentFacts;
