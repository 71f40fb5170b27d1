import { createHash } from 'node:crypto';
import type { UnitFacts } from '@shared/contract/calls';
import { COMPARTMENTS_OF, type MedicineKind, type UnitKind } from '@shared/domain/cold-unit';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { unknownCompartment } from '@shared/domain/unknown-compartment';
import type { CallToTake } from '../calls/take-call';
import type { AddressPoint } from '../region/address-points';
import { FAMILY_NAMES, GIVEN_NAMES } from './demo-people';

/** Repeatable chances, so that every demo is the same storm. */
export class Chance {
  private state: number;

  constructor(seed: string) {
    this.state = createHash('sha256').update(seed).digest().readUInt32LE(0);
  }

  /** 0 up to 1, by mulberry32. */
  next(): number {
    this.state = (this.state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(this.state ^ (this.state >>> 15), 1 | this.state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296;
  }

  below(most: number): number {
    return Math.floor(this.next() * most);
  }

  pick<T>(list: readonly T[]): T {
    const one = list[this.below(list.length)];
    if (one === undefined) throw new RangeError('nothing to pick from');
    return one;
  }

  /** A version-4 UUID, since ids on the wire are those. */
  uuid(): string {
    const hex = Array.from({ length: 32 }, () => this.below(16).toString(16));
    hex[12] = '4';
    hex[16] = '89ab'[this.below(4)] ?? '8';
    const text = hex.join('');
    return [
      text.slice(0, 8),
      text.slice(8, 12),
      text.slice(12, 16),
      text.slice(16, 20),
      text.slice(20),
    ].join('-');
  }
}

const KINDS: readonly (readonly [UnitKind, number])[] = [
  ['fridge-freezer', 0.52],
  ['refrigerator', 0.1],
  ['upright-freezer', 0.14],
  ['chest-freezer', 0.16],
  ['walk-in', 0.05],
  ['medicine-fridge', 0.03],
];
const PLACES = ['kitchen', 'garage', 'basement', 'pantry', 'porch', 'back room'];
const REMARKS = [
  'Hums and clicks every few minutes.',
  'Light is on, nothing runs.',
  'Dog in the yard, friendly.',
  'Ring twice, the bell is weak.',
  'It was noisy before the storm already.',
  'Compressor gets hot, fan turns.',
  '',
  '',
  '',
];
const MEDICINES: readonly MedicineKind[] = [
  'insulin',
  'label-not-read',
  'labelled',
  'milk-or-formula',
];

/** One invented household's call at an address, received at a moment. */
export function demoCall(
  chance: Chance,
  address: AddressPoint,
  number: number,
  times: { readonly receivedAt: Instant; readonly outAt: Instant; readonly backAt: Instant | null },
): CallToTake {
  const units = [unit(chance)];
  if (chance.next() < 0.18) units.push(unit(chance));
  return {
    callId: chance.uuid(),
    // Fictional numbers only: 555-0100 to 555-0199 under one area code after another.
    phone: `+1${String(210 + Math.floor(number / 100))}55501${String(number % 100).padStart(2, '0')}`,
    name: `${chance.pick(GIVEN_NAMES)} ${chance.pick(FAMILY_NAMES)}`,
    address: {
      text: `${address.number} ${address.street}, ${address.city} ${address.postcode}`,
      unitNo: address.flats > 1 ? `Apt ${String(1 + chance.below(address.flats))}` : '',
      lonLat: [address.at[0], address.at[1]],
      kind: 'rooftop',
    },
    language: chance.next() < 0.14 ? 'es' : 'en',
    mayText: chance.next() < 0.9,
    powerOutAt: times.outAt,
    powerBackAt: times.backAt,
    powerOnSpans: [],
    timesFrom: 'area',
    householdAtRisk: number % 23 === 0,
    units,
    remark: chance.pick(REMARKS),
    danger: false,
    receivedAt: times.receivedAt,
    source: 'phone',
  };
}

function unit(chance: Chance): UnitFacts {
  const kind = weighted(chance, KINDS);
  const compartments = COMPARTMENTS_OF[kind].map((compartment) =>
    compartmentOf(chance, kind, compartment),
  );
  // Medicine in the door of an ordinary refrigerator is common.
  if (kind === 'fridge-freezer' && chance.next() < 0.12)
    compartments.push(compartmentOf(chance, kind, 'medicine'));
  return {
    id: chance.uuid(),
    kind,
    compressorStart: chance.pick(['relay', 'relay', 'inverter', 'unknown'] as const),
    ageYears: 1 + chance.below(16),
    cubicFeet: kind === 'walk-in' ? 400 : 12 + chance.below(14),
    place: kind === 'walk-in' ? 'back room' : chance.pick(PLACES),
    cooling: 'unknown',
    ranBetween: 'unknown',
    compartments,
  };
}

function compartmentOf(
  chance: Chance,
  kind: UnitKind,
  compartment: UnitFacts['compartments'][number]['kind'],
): UnitFacts['compartments'][number] {
  // Drawn in this order, so that the demo storm stays the same.
  const fill = compartment === 'freezer' ? chance.pick([0.25, 0.5, 0.5, 0.75, 1, 1, null]) : null;
  const door = chance.pick(['shut', 'shut', 'few', 'few', 'many', 'unknown'] as const);
  const roomF = chance.pick([68, 70, 72, 74, 78, 84, null]);
  const medicine = compartment === 'medicine' ? chance.pick(MEDICINES) : 'label-not-read';
  const unknown = unknownCompartment(kind, compartment, medicine);
  return {
    ...unknown,
    fill,
    door,
    roomF,
    coldAtLoss: compartment === 'commercial-stock' ? true : null,
    valueCents: Math.round(unknown.valueCents * (0.6 + chance.next() * 0.8)),
  };
}

function weighted<T>(chance: Chance, list: readonly (readonly [T, number])[]): T {
  let left = chance.next() * list.reduce((sum, [, weight]) => sum + weight, 0);
  for (const [one, weight] of list) {
    left -= weight;
    if (left <= 0) return one;
  }
  return chance.pick(list)[0];
}

/** Minutes after power comes back until a household rings: most within hours, a few the next day. */
export function ringsAfter(chance: Chance): number {
  return (20 + 220 * -Math.log(1 - chance.next())) * MINUTE_MS;
}

export const hours = (count: number): number => count * HOUR_MS;
