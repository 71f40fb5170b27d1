import { randomUUID } from 'node:crypto';
import type { UnitFacts } from '@shared/contract/calls';
import type { MedicineKind } from '@shared/domain/cold-unit';
import { isOnlyPostBox } from '@shared/domain/address/post-box';
import type { UsualValues } from '@shared/domain/food-value';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import type { NightCall, NightUnit } from '@shared/domain/night-log/night-call';
import { formatPhone } from '@shared/domain/phone-number';
import { unknownCompartment } from '@shared/domain/unknown-compartment';
import type { CallToTake } from '../calls/take-call';
import type { RegionInUse } from '../region/region-in-use';

/** What the row does not say. */
export interface NightSetting {
  readonly region: RegionInUse;
  /** The earliest plausible moment for a row that does not say when the power went. */
  readonly stormBegan: Instant;
  readonly now: Instant;
  /** What contents of a usual unit are worth. */
  readonly values: UsualValues;
}

/**
 * A call as the intake would have taken it, made of what an answering service wrote down. What
 * nobody asked stays unknown, and the rules take the cautious reading of it.
 */
export function callFromLog(call: NightCall, setting: NightSetting): CallToTake {
  const powerOutAt = plausibleOut(call, setting);
  return {
    callId: randomUUID(),
    phone: call.phone?.e164 ?? null,
    name: (call.name ?? call.business ?? 'Name not given').slice(0, 120),
    address: addressOf(call, setting.region),
    language: call.language === 'es' ? 'es' : 'en',
    // Nobody asked them whether we may text.
    mayText: false,
    powerOutAt: powerOutAt ?? Math.min(setting.stormBegan, call.receivedAt),
    powerBackAt: plausibleBack(call, powerOutAt),
    powerOnSpans: [],
    timesFrom: powerOutAt === null ? 'area' : 'caller',
    householdAtRisk: false,
    units: unitsOf(call, setting.values),
    remark: remarkOf(call),
    danger: call.dangers.length > 0,
    receivedAt: Math.min(call.receivedAt, setting.now),
    source: 'night-log',
  };
}

/** A unit has four compartments at most, two of them its own. */
const MOST_MEDICINES = 2;
const LONGEST_OUT_MS = 40 * 24 * 60 * MINUTE_MS;

function plausibleOut(call: NightCall, { now }: NightSetting): Instant | null {
  const { powerOutAt } = call;
  const isPlausible = powerOutAt !== null && powerOutAt <= now && powerOutAt > now - LONGEST_OUT_MS;
  return isPlausible ? powerOutAt : null;
}

function plausibleBack(call: NightCall, powerOutAt: Instant | null): Instant | null {
  const { powerBackAt } = call;
  if (call.powerStillOut || powerBackAt === null || powerOutAt === null) return null;
  return powerBackAt >= powerOutAt ? powerBackAt : null;
}

function addressOf(call: NightCall, region: RegionInUse): CallToTake['address'] {
  const said = call.address;
  const found = said && region.locate(said.text);
  // The apartment that the line itself still names is the call's as well.
  const unitNo = (said?.unitNo ?? found?.unitNo ?? '').slice(0, 24);
  if (found)
    return { text: found.label.slice(0, 160), unitNo, lonLat: found.lonLat, kind: found.kind };
  return {
    text: (said?.text ?? 'Address not given').slice(0, 160),
    unitNo,
    lonLat: null,
    kind: 'unlocated',
  };
}

function unitsOf(call: NightCall, values: UsualValues): UnitFacts[] {
  const named: readonly NightUnit[] =
    call.units.length > 0
      ? call.units
      : [
          {
            kind: 'fridge-freezer',
            compartments: ['fresh-food', 'freezer'],
            said: '',
            assumed: true,
          },
        ];
  const units = named.slice(0, 12).map((unit) => unitOf(unit, values));
  const first = units[0];
  const hasMedicine = units.some((unit) =>
    unit.compartments.some(({ kind }) => kind === 'medicine'),
  );
  if (!call.medicine.mentioned || !first) return units;
  if (!hasMedicine) {
    const kinds: readonly (MedicineKind | undefined)[] =
      call.medicine.kinds.length > 0 ? call.medicine.kinds.slice(0, MOST_MEDICINES) : [undefined];
    for (const kind of kinds)
      first.compartments.push(compartmentOf(first.kind, 'medicine', values, kind));
    return units;
  }
  const [kind] = call.medicine.kinds;
  for (const { compartments } of units)
    for (const one of compartments) if (one.medicine && kind) one.medicine.kind = kind;
  return units;
}

function unitOf(unit: NightUnit, values: UsualValues): UnitFacts {
  return {
    id: randomUUID(),
    kind: unit.kind,
    compressorStart: 'unknown',
    ageYears: null,
    cubicFeet: null,
    place: unit.said.replace(/\p{Cc}+/gu, ' ').slice(0, 60),
    cooling: 'unknown',
    ranBetween: 'unknown',
    compartments: unit.compartments.map((kind) => compartmentOf(unit.kind, kind, values)),
  };
}

const compartmentOf = (
  unit: UnitFacts['kind'],
  kind: UnitFacts['compartments'][number]['kind'],
  values: UsualValues,
  medicine: MedicineKind = 'label-not-read',
): UnitFacts['compartments'][number] => unknownCompartment(unit, kind, medicine, values);

/** Everything that has no field of its own, so that nothing is lost. */
export function remarkOf(call: NightCall): string {
  return [
    call.remarks,
    call.contents && `Contents: ${call.contents}`,
    call.business && call.name ? `Business: ${call.business}` : '',
    call.address?.note ?? '',
    isOnlyPostBox(call.address?.text ?? '') ? 'Only a post box was given: ask for the street.' : '',
    call.otherPhones.length > 0
      ? `Also: ${call.otherPhones.map(({ e164 }) => formatPhone(e164)).join(', ')}`
      : '',
    call.language && !['en', 'es'].includes(call.language) ? `Speaks ${call.language}` : '',
    call.saysRunning ? 'The log says that it runs again: ask.' : '',
    ...call.doubts,
  ]
    .filter((line) => line !== '' && line !== null)
    .join('\n')
    .slice(0, 2000);
}
