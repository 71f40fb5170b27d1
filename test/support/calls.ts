import { randomUUID } from 'node:crypto';
import type { TakeCall, UnitFacts } from '@shared/contract/calls';
import { HOUR_MS, type Instant } from '@shared/domain/instant';

/** A half-full upright freezer with its door shut; say only what matters to the test. */
export function aUnit(facts: Partial<UnitFacts['compartments'][number]> = {}): UnitFacts {
  return {
    id: randomUUID(),
    kind: 'upright-freezer',
    compressorStart: 'unknown',
    ageYears: null,
    cubicFeet: null,
    place: 'garage',
    cooling: 'unknown',
    ranBetween: 'unknown',
    compartments: [
      {
        kind: 'freezer',
        fill: 0.5,
        door: 'shut',
        standingOpenSince: null,
        roomF: 72,
        beforeF: null,
        readings: [],
        inspections: [],
        dryIce: [],
        ice: [],
        medicine: null,
        coldAtLoss: null,
        valueCents: 30_000,
        ...facts,
      },
    ],
  };
}

let phones = 0;
/** A fictional number that this test has not used: the last two digits and the area code vary. */
export function aPhone(): string {
  phones += 1;
  const area = 201 + Math.floor(phones / 100);
  return `+1${String(area)}55501${String(phones % 100).padStart(2, '0')}`;
}

/** A household whose power went two hours before `now`. */
export function aCall(now: Instant, told: Partial<TakeCall> = {}): TakeCall {
  return {
    commandId: randomUUID(),
    callId: randomUUID(),
    phone: aPhone(),
    name: 'Wren Ashdown',
    address: {
      text: '12 Larch Ave, Pell Harbor',
      unitNo: '',
      lonLat: [-47.7, 36.4],
      kind: 'rooftop',
    },
    language: 'en',
    mayText: true,
    powerOutAt: now - 2 * HOUR_MS,
    powerBackAt: now - HOUR_MS,
    powerOnSpans: [],
    timesFrom: 'caller',
    householdAtRisk: false,
    units: [aUnit()],
    remark: '',
    danger: false,
    ...told,
  };
}
