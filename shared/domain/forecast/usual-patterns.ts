import { defaultValueCents } from '../food-value';
import { causesOfVisit, partChances } from '../phone-check/part-chances';
import { PARTS } from '../skills';
import type { UnitKind } from '../cold-unit';
import type { CallPattern, PartChances } from './facts';

const partsOf = (kind: UnitKind): PartChances =>
  partChances(causesOfVisit({}, { kind, compressorStart: 'unknown' })).map(([part, chance]) => [
    PARTS.indexOf(part),
    chance,
  ]);

/**
 * What a call brings before any has come, and beside the few that have: a refrigerator whose fresh food
 * is past its hours and whose freezer holds on, a freezer that stands alone, and, rare and dear, a
 * walk-in. Hours and weights are our estimates.
 */
export const USUAL_PATTERNS: readonly CallPattern[] = [
  {
    compartments: [
      {
        valueCents: defaultValueCents('fridge-freezer', 'fresh-food'),
        hoursLeft: -4,
        isMedicine: false,
      },
      {
        valueCents: defaultValueCents('fridge-freezer', 'freezer'),
        hoursLeft: 16,
        isMedicine: false,
      },
    ],
    skills: 0,
    parts: partsOf('fridge-freezer'),
    weight: 1,
  },
  {
    compartments: [
      {
        valueCents: defaultValueCents('chest-freezer', 'freezer'),
        hoursLeft: 24,
        isMedicine: false,
      },
    ],
    skills: 0,
    parts: partsOf('chest-freezer'),
    weight: 0.5,
  },
  {
    compartments: [
      {
        valueCents: defaultValueCents('fridge-freezer', 'medicine'),
        hoursLeft: 12,
        isMedicine: true,
      },
    ],
    skills: 0,
    parts: partsOf('fridge-freezer'),
    weight: 0.3,
  },
  {
    compartments: [
      {
        valueCents: defaultValueCents('walk-in', 'commercial-stock'),
        hoursLeft: 0,
        isMedicine: false,
      },
    ],
    skills: 0,
    parts: partsOf('walk-in'),
    weight: 0.3,
  },
];
