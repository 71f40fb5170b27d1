import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import {
  DOOR_USES,
  type CompartmentFacts,
  type DoorUse,
  type Inspection,
  type MedicineKind,
  type Reading,
} from '@shared/domain/cold-unit';
import { compartmentState, thawClock } from '@shared/domain/thaw/thaw-clock';
import { aCompartment, aMedicine, at, hoursOf, lossUntil } from './thaw-facts';
import { THAW_VECTORS } from './thaw-vectors';

const TOLERANCE_HOURS = 0.001;

function expectHours(facts: CompartmentFacts, atRisk: number, lost: number | null): void {
  const hours = hoursOf(thawClock(facts, lossUntil()));
  expect(Math.abs(hours.atRisk - atRisk)).toBeLessThanOrEqual(TOLERANCE_HOURS);
  if (lost === null) expect(hours.lost).toBeNull();
  else expect(Math.abs((hours.lost ?? Number.NaN) - lost)).toBeLessThanOrEqual(TOLERANCE_HOURS);
}

const stateAt = (facts: CompartmentFacts, hours: number) =>
  compartmentState(thawClock(facts, lossUntil()), lossUntil(), at(hours));

describe('thawClock on worked examples', () => {
  it.each(THAW_VECTORS)('$id: $situation ($source)', (example) => {
    expectHours(example.facts, example.atRiskHours, example.lostHours);
    expect(stateAt(example.facts, example.elapsedHours)).toBe(example.state);
  });
});

/** The same kind of examples as a file, so that examples made by others can be tried. */
interface FileVector {
  readonly id: string;
  readonly clock: 'fresh' | 'freezer' | 'medicine' | 'commercial';
  readonly inputs: Readonly<Record<string, unknown>>;
  readonly inputs_text: string;
  readonly elapsed_h: number;
  readonly at_risk_from_h: number;
  readonly lost_from_h: number | null;
  readonly state: string;
}

const folder = process.env['THAWLINE_TEST_DATA'];
const file = folder ? join(folder, 'trade-vectors.json') : '';

if (file && existsSync(file)) {
  describe(`thawClock on the examples of ${file}`, () => {
    const vectors = JSON.parse(readFileSync(file, 'utf8')) as FileVector[];

    it('finds examples in the file', () => expect(vectors.length).toBeGreaterThan(0));

    it.each(vectors)('$id: $inputs_text', (example) => {
      const facts = factsOf(example);
      expectHours(facts, example.at_risk_from_h, example.lost_from_h);
      const state = example.state === 'replace' ? 'lost' : example.state;
      expect(stateAt(facts, example.elapsed_h)).toBe(state);
    });
  });
} else {
  it.skip('tries trade-vectors.json too: set THAWLINE_TEST_DATA to the folder that holds it', () => {});
}

const COLD_F = 39;
const WARM_F = 44;

const MEDICINE_NAMES: Readonly<Record<string, MedicineKind>> = {
  insulin: 'insulin',
  insulin_frozen: 'insulin',
  frozen_insulin: 'insulin',
  label: 'labelled',
  labelled: 'labelled',
  unknown: 'label-not-read',
  other: 'label-not-read',
  vaccine: 'injectable',
  injectable: 'injectable',
  biologic: 'injectable',
  milk: 'milk-or-formula',
  breast_milk: 'milk-or-formula',
  formula: 'milk-or-formula',
  frozen_milk: 'frozen-milk',
  milk_frozen: 'frozen-milk',
};

const KNOWN_INPUTS = new Set(
  (
    'Ta door T0 w open_standing fill open_at dry crystals_at kind already_out label frozen last_ok ' +
    'readings ok_at_loss'
  ).split(' '),
);

function factsOf({ clock, inputs }: FileVector): CompartmentFacts {
  const strange = Object.keys(inputs).filter((name) => !KNOWN_INPUTS.has(name));
  if (strange.length > 0) throw new Error(`inputs without a meaning here: ${strange.join(', ')}`);

  const door = inputs['door'] as DoorUse | null | undefined;
  if (door && !DOOR_USES.includes(door)) throw new Error(`unknown door use: ${door}`);
  const known: Partial<CompartmentFacts> = {
    door: door ?? 'unknown',
    roomF: numberOf(inputs['Ta']),
    beforeF: numberOf(inputs['T0']),
    fill: numberOf(inputs['fill']),
    standingOpenSince: openSince(inputs),
    readings: readingsOf(inputs),
    inspections: inspectionsOf(inputs),
    dryIce: dryIceOf(inputs),
  };
  switch (clock) {
    case 'fresh':
      return aCompartment('fresh-food', known);
    case 'freezer':
      return aCompartment('freezer', known);
    case 'commercial':
      return aCompartment('commercial-stock', {
        ...known,
        coldAtLoss: (inputs['ok_at_loss'] as boolean | undefined) ?? true,
      });
    case 'medicine':
      return aMedicine(medicineOf(inputs), known);
  }
}

function medicineOf(inputs: FileVector['inputs']): Parameters<typeof aMedicine>[0] {
  const name = String(inputs['kind'] ?? 'unknown');
  const kind = MEDICINE_NAMES[name];
  if (!kind) throw new Error(`unknown medicine: ${name}`);
  const [labelHours, labelMaxF] = (inputs['label'] as [number, number] | undefined) ?? [null, null];
  return {
    kind,
    labelHours,
    labelMaxF,
    frozen: kind === 'insulin' && (inputs['frozen'] === true || name.includes('frozen')),
    hoursAlreadyUnrefrigerated: numberOf(inputs['already_out']) ?? 0,
  };
}

function openSince(inputs: FileVector['inputs']): number | null {
  const hours = numberOf(inputs['open_standing'] === true ? inputs['w'] : inputs['open_at']);
  return hours === null ? null : at(hours);
}

function readingsOf(inputs: FileVector['inputs']): Reading[] {
  const log = (inputs['readings'] as [number, number][] | undefined) ?? [];
  const readings = log.map(([hours, temperatureF]) => ({ at: at(hours), temperatureF }));
  const lastGood = numberOf(inputs['last_ok']);
  if (lastGood !== null) readings.push({ at: at(lastGood), temperatureF: 40 });

  // `w` alone: cold until then, and read above 40 F some time after.
  const coldUntil = inputs['open_standing'] === true ? null : numberOf(inputs['w']);
  if (coldUntil !== null) {
    readings.push({ at: at(coldUntil), temperatureF: COLD_F });
    readings.push({ at: at(coldUntil + 0.25), temperatureF: WARM_F });
  }
  return readings;
}

function inspectionsOf(inputs: FileVector['inputs']): Inspection[] {
  const hours = numberOf(inputs['crystals_at']);
  return hours === null ? [] : [{ at: at(hours), finding: 'ice-crystals' }];
}

function dryIceOf(inputs: FileVector['inputs']): CompartmentFacts['dryIce'] {
  const dry = inputs['dry'] as [number, number, number] | null | undefined;
  return dry ? [{ at: at(dry[0]), pounds: dry[1], cubicFeet: dry[2] }] : [];
}

const numberOf = (value: unknown): number | null => (typeof value === 'number' ? value : null);
