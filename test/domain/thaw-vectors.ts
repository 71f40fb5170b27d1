import type { CompartmentFacts } from '@shared/domain/cold-unit';
import type { CompartmentState } from '@shared/domain/thaw/thaw-clock';
import { aCompartment, aMedicine, at } from './thaw-facts';

/**
 * Worked examples of the four thaw clocks.
 *
 * Sources of the hours:
 * - FSIS: USDA Food Safety and Inspection Service, power-outage advisories 2012-2024 and the USDA
 *   food-safety FAQ: refrigerator 4 h with the door shut; freezer 48 h full, 24 h half full; above
 *   40 F discard after 2 h (1 h above 90 F); refreeze with ice crystals or at/below 40 F.
 * - DRY ICE: FSIS/FDA: 50 lb keeps a full 18 cu ft freezer cold for two days.
 * - FDA INSULIN: FDA, "Information Regarding Insulin Storage and Switching Between Products in an
 *   Emergency": 28 days at 59-86 F; frozen insulin is not used.
 * - CDC DRUGS: HHS/CDC, "Refrigerated Drugs": without power for a day or more, replace.
 * - COUNTY: Santa Clara County public health: a closed refrigerator keeps medicine cool 2-3 h.
 * - FOOD CODE: FDA Food Code 3-501.16 (41 F) and 3-501.19 (4 h); San Francisco Department of Public
 *   Health, power-outage table; Washington State DOH: 2 h or less is not considered hazardous.
 * - OURS: the 72 F reference room, the door factors, three quarters of the limit, a freezer below
 *   half full in proportion, and 2 h for stock of unknown temperature are our estimates.
 */
export interface ThawVector {
  readonly id: string;
  readonly situation: string;
  readonly facts: CompartmentFacts;
  readonly elapsedHours: number;
  readonly atRiskHours: number;
  readonly lostHours: number | null;
  readonly state: CompartmentState;
  readonly source: string;
}

const shut72 = { door: 'shut', roomF: 72 } as const;

const fresh = (known: Partial<CompartmentFacts>) => aCompartment('fresh-food', known);
const freezer = (known: Partial<CompartmentFacts>) => aCompartment('freezer', known);
const stock = (known: Partial<CompartmentFacts>) =>
  aCompartment('commercial-stock', { coldAtLoss: true, ...known });

const vector = (
  id: string,
  situation: string,
  facts: CompartmentFacts,
  [elapsedHours, atRiskHours, lostHours]: readonly [number, number, number | null],
  state: CompartmentState,
  source: string,
): ThawVector => ({ id, situation, facts, elapsedHours, atRiskHours, lostHours, state, source });

const FRESH: readonly ThawVector[] = [
  vector('F1', 'one hour, door shut, 72 F', fresh(shut72), [1, 3, 4], 'still-safe', 'FSIS'),
  vector('F3', 'just under four hours', fresh(shut72), [3.99, 3, 4], 'at-risk', 'FSIS'),
  vector(
    'F5',
    'a cold kitchen gives no credit',
    fresh({ door: 'shut', roomF: 50 }),
    [3.5, 3, 4],
    'at-risk',
    'FSIS; OURS',
  ),
  vector(
    'F7',
    'a 90 F kitchen brings at-risk forward: 4 * 32 / 50',
    fresh({ door: 'shut', roomF: 90 }),
    [2.5, 2.56, 4],
    'still-safe',
    'FSIS; OURS',
  ),
  vector(
    'F9',
    'opened twice at 100 F: 4 * 32 / 60 * 0.75',
    fresh({ door: 'few', roomF: 100 }),
    [1.5, 1.6, 4],
    'still-safe',
    'FSIS; OURS',
  ),
  vector('F11', 'nothing known', fresh({}), [1, 1.28, 4], 'still-safe', 'FSIS; OURS'),
  vector(
    'F13',
    'door standing open from half an hour, 75 F: two hours from then',
    fresh({ door: 'many', roomF: 75, standingOpenSince: at(0.5) }),
    [2.4, 0.5, 2.5],
    'at-risk',
    'FSIS',
  ),
  vector(
    'F15',
    'the same at 95 F: one hour from then',
    fresh({ door: 'many', roomF: 95, standingOpenSince: at(0.5) }),
    [1.5, 0.5, 1.5],
    'lost',
    'FSIS',
  ),
  vector(
    'F17',
    'was at 39 F before: 4 * ln(33/32) / ln(35/32)',
    fresh({ ...shut72, beforeF: 39 }),
    [1.4, 1.3735, 4],
    'at-risk',
    'FSIS; OURS',
  ),
  vector(
    'F19',
    'reads 44 F after an hour and was never read before',
    fresh({ ...shut72, readings: [{ at: at(1), temperatureF: 44 }] }),
    [2, 0, 2],
    'lost',
    'FSIS',
  ),
  vector(
    'F21',
    'reads 39 F at one hour and 44 F at two',
    fresh({
      ...shut72,
      readings: [
        { at: at(1), temperatureF: 39 },
        { at: at(2), temperatureF: 44 },
      ],
    }),
    [3, 1, 3],
    'lost',
    'FSIS',
  ),
];

const FREEZER: readonly ThawVector[] = [
  vector(
    'Z1',
    'full, shut, 72 F',
    freezer({ ...shut72, fill: 1 }),
    [35, 36, 48],
    'still-safe',
    'FSIS',
  ),
  vector('Z3', 'full, at 48 h', freezer({ ...shut72, fill: 1 }), [48, 36, 48], 'lost', 'FSIS'),
  vector('Z5', 'half full', freezer({ ...shut72, fill: 0.5 }), [18, 18, 24], 'at-risk', 'FSIS'),
  vector(
    'Z7',
    'three quarters full counts as half full',
    freezer({ ...shut72, fill: 0.75 }),
    [30, 18, 24],
    'lost',
    'FSIS',
  ),
  vector(
    'Z9',
    'a quarter full: 48 * 0.25',
    freezer({ ...shut72, fill: 0.25 }),
    [12, 9, 12],
    'lost',
    'OURS',
  ),
  vector(
    'Z11',
    'full chest in a 100 F garage: 48 * 40 / 68',
    freezer({ door: 'shut', roomF: 100, fill: 1 }),
    [28, 28.2353, 48],
    'still-safe',
    'FSIS; OURS',
  ),
  vector(
    'Z13',
    'half full, opened twice at 90 F: 24 * 40 / 58 * 0.75',
    freezer({ door: 'few', roomF: 90, fill: 0.5 }),
    [12.4, 12.4138, 24],
    'still-safe',
    'FSIS; OURS',
  ),
  vector('Z15', 'nothing known', freezer({}), [4, 4.1379, 24], 'still-safe', 'FSIS; OURS'),
  vector('Z17', 'nothing known, a day', freezer({}), [24, 4.1379, 24], 'lost', 'FSIS; OURS'),
  vector(
    'Z19',
    '50 lb of dry ice in 18 cu ft at 40 h: 40 + 48, and at risk already',
    freezer({ ...shut72, fill: 1, dryIce: [{ at: at(40), pounds: 50, cubicFeet: 18 }] }),
    [60, 36, 88],
    'at-risk',
    'DRY ICE',
  ),
  vector(
    'Z21',
    'lid standing open from 6 h: no published hour, so look inside',
    freezer({ roomF: 72, door: 'many', fill: 1, standingOpenSince: at(6) }),
    [8, 6, 48],
    'at-risk',
    'FSIS; OURS',
  ),
  vector(
    'Z23',
    'ice crystals found at 50 h: refreeze within two hours',
    freezer({ ...shut72, fill: 1, inspections: [{ at: at(50), finding: 'ice-crystals' }] }),
    [50, 36, 52],
    'at-risk',
    'FSIS',
  ),
];

const MEDICINE: readonly ThawVector[] = [
  vector(
    'M1',
    'insulin at 78 F: 28 days',
    aMedicine({ kind: 'insulin' }, { roomF: 78 }),
    [72, 504, 672],
    'still-safe',
    'FDA INSULIN',
  ),
  vector(
    'M3',
    'insulin at 92 F: replace',
    aMedicine({ kind: 'insulin' }, { roomF: 92 }),
    [24, 0, 24],
    'lost',
    'FDA INSULIN; CDC DRUGS',
  ),
  vector(
    'M5',
    'insulin that was out for 20 days before',
    aMedicine({ kind: 'insulin', hoursAlreadyUnrefrigerated: 480 }, { roomF: 78 }),
    [180, 144, 192],
    'at-risk',
    'FDA INSULIN',
  ),
  vector(
    'M7',
    'label not read',
    aMedicine({}, { roomF: 78 }),
    [1.9, 2, 24],
    'still-safe',
    'COUNTY',
  ),
  vector(
    'M9',
    'label not read, a day',
    aMedicine({}, { roomF: 78 }),
    [24, 2, 24],
    'lost',
    'CDC DRUGS',
  ),
  vector(
    'M11',
    'label allows 14 days up to 77 F, the room has 82 F',
    aMedicine({ kind: 'labelled', labelHours: 336, labelMaxF: 77 }, { roomF: 82 }),
    [1, 0, 24],
    'at-risk',
    'the label; CDC DRUGS',
  ),
];

const STOCK: readonly ThawVector[] = [
  vector('C1', 'cold at the loss, no log', stock({}), [1.5, 2, 4], 'still-safe', 'FOOD CODE'),
  vector('C3', 'cold at the loss, four hours', stock({}), [4, 2, 4], 'lost', 'FOOD CODE'),
  vector(
    'C5',
    'the log has 40 F at three hours: four hours from then',
    stock({ readings: [{ at: at(3), temperatureF: 40 }] }),
    [7, 5, 7],
    'lost',
    'FOOD CODE',
  ),
  vector(
    'C7',
    'the log has 44 F at one hour',
    stock({ readings: [{ at: at(1), temperatureF: 44 }] }),
    [1, 1, 4],
    'at-risk',
    'FOOD CODE',
  ),
  vector(
    'C9',
    'nobody knows whether it was cold at the loss',
    stock({ coldAtLoss: false }),
    [1, 0, 2],
    'at-risk',
    'OURS',
  ),
];

export const THAW_VECTORS: readonly ThawVector[] = [...FRESH, ...FREEZER, ...MEDICINE, ...STOCK];
