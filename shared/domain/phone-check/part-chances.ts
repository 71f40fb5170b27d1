import { PARTS, type Part } from '../skills';
import { widestCauses } from './cause-rules';
import { CAUSES, type LikelyCause, type Likelihood } from './causes';
import { conclude, type PhoneCheckAnswers } from './phone-check';
import type { CheckUnit, Heard } from './question';

/** The chance, 0 to 1, that a visit needs each part; a visit needs one of them or none. */
export type PartChance = readonly [part: Part, chance: number];

/**
 * How much each word counts against the others. Our estimates without a source: the phone check ranks
 * causes and does not measure them.
 */
const WEIGHTS: Readonly<Record<Likelihood, number>> = {
  likely: 6,
  possible: 2,
  'less-likely': 1,
};
/** Stands beside the causes for what no question asks about. Our estimate. */
const SOMETHING_ELSE = 2;

const NOTHING_HEARD: Heard = { said: () => false, number: () => null };

/** What a visit may find: what the answers point to, or everything while nothing was asked. */
export function causesOfVisit(answers: PhoneCheckAnswers, unit: CheckUnit): readonly LikelyCause[] {
  const { causes } = conclude(answers, unit);
  return causes.length > 0 ? causes : widestCauses(NOTHING_HEARD, unit);
}

/**
 * What the causes ask of the van. Each cause has its weight's share; of a cause that names several
 * parts, one is replaced, any of them alike.
 */
export function partChances(causes: readonly LikelyCause[]): readonly PartChance[] {
  const whole = causes.reduce((sum, one) => sum + WEIGHTS[one.likelihood], SOMETHING_ELSE);
  const chances = new Map<Part, number>();
  for (const { cause, likelihood } of causes) {
    const { parts } = CAUSES[cause];
    for (const part of parts) {
      const chance = WEIGHTS[likelihood] / whole / parts.length;
      chances.set(part, (chances.get(part) ?? 0) + chance);
    }
  }
  return PARTS.flatMap((part): PartChance[] => {
    const chance = chances.get(part);
    return chance === undefined ? [] : [[part, chance]];
  });
}
