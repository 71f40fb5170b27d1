import type { Medicine } from '../cold-unit';
import { hoursInWords, type ClockHours, type FactsInHours } from './facts-in-hours';
import { freezerHours } from './freezer';
import { freshFoodHours } from './fresh-food';
import { ACT_SHARE, ASSUMED_ROOM_F, roomInWords } from './warming';

/**
 * Source: FDA, "Information Regarding Insulin Storage and Switching Between Products in an
 * Emergency": unrefrigerated at 59-86 F for up to 28 days; above 86 F it loses effect.
 */
const INSULIN_HOURS = 28 * 24;
const INSULIN_MAX_F = 86;

/** Source: HHS/CDC public message "Refrigerated Drugs": power out "a day or more", replace. */
const A_DAY_HOURS = 24;

/** Source: Santa Clara County public health: a closed refrigerator keeps medicine cool 2-3 h. */
const COOL_HOURS = 2;

/**
 * The clock of medicine kept cold. "Lost" is said as "Replace": nobody is told to throw medicine
 * away, and no rule here ever calls a vaccine or injectable biologic lost.
 */
export function medicineHours(facts: FactsInHours): ClockHours {
  const medicine = facts.medicine;
  switch (medicine?.kind) {
    case 'insulin':
      return onTheWall(insulinHours(medicine, facts.roomF), facts);
    case 'labelled':
      return onTheWall(labelledHours(medicine, facts.roomF), facts);
    case 'injectable':
      return clock(0, null, 'medicine-quarantine', [
        'Vaccine or injectable: set apart, keep cold, ask the pharmacist (no hour is published)',
      ]);
    case 'milk-or-formula':
      return milkHours(facts);
    case 'frozen-milk':
      return { ...freezerHours(facts), advice: 'frozen-milk' };
    case 'label-not-read':
    case 'rather-not-say':
    case undefined:
      return onTheWall(labelNotReadHours(medicine), facts);
  }
}

/** Limits of medicine count hours out of the cold; hours in which the unit ran are not among them. */
function onTheWall(hours: ClockHours, { time }: FactsInHours): ClockHours {
  const wall = (uncooled: number): number => time.wallAfter(uncooled);
  const { likelyHours, lostHours } = hours;
  return {
    ...hours,
    atRiskHours: wall(hours.atRiskHours),
    earliestHours: wall(hours.earliestHours),
    likelyHours: likelyHours === null ? null : wall(likelyHours),
    lostHours: lostHours === null ? null : wall(lostHours),
  };
}

function insulinHours(medicine: Medicine, roomF: number | null): ClockHours {
  if (medicine.frozen) {
    return clock(0, 0, 'insulin-frozen', ['Insulin that froze is not used (FDA)']);
  }
  const leftHours = INSULIN_HOURS - medicine.hoursAlreadyUnrefrigerated;
  if (roomF === null || roomF > INSULIN_MAX_F) {
    return clock(0, Math.min(A_DAY_HOURS, leftHours), 'insulin-hot', [
      `Insulin, ${roomF === null ? 'room not known' : roomInWords(roomF)}: ` +
        'above 86 F it loses effect (FDA); a day is counted (CDC)',
    ]);
  }
  return clock(ACT_SHARE * leftHours, leftHours, 'insulin', [
    `Insulin at or under 86 F: published limit 28 days, ${hoursInWords(leftHours)} left (FDA)`,
  ]);
}

function labelledHours(medicine: Medicine, roomF: number | null): ClockHours {
  const { labelHours, labelMaxF } = medicine;
  if (labelHours === null) return labelNotReadHours(medicine);

  // A label whose temperature nobody read counts as exceeded (our estimate).
  const isWithinLabel = labelMaxF !== null && (roomF ?? ASSUMED_ROOM_F) <= labelMaxF;
  const allowedHours = isWithinLabel ? labelHours : Math.min(A_DAY_HOURS, labelHours);
  const leftHours = allowedHours - medicine.hoursAlreadyUnrefrigerated;
  const reason = isWithinLabel
    ? `Label: ${hoursInWords(labelHours)} up to ${labelMaxF} F`
    : `Label limit ${labelMaxF === null ? 'of temperature not read' : `${labelMaxF} F`}, ` +
      `${roomInWords(roomF)}: ${hoursInWords(allowedHours)} counted (CDC: a day or more, replace)`;
  return clock(frozenOr(medicine, isWithinLabel ? ACT_SHARE * leftHours : 0), leftHours, 'label', [
    reason,
  ]);
}

function labelNotReadHours(medicine: Medicine | null | undefined): ClockHours {
  const outHours = medicine?.hoursAlreadyUnrefrigerated ?? 0;
  const atRiskHours = frozenOr(medicine, COOL_HOURS - outHours);
  return clock(atRiskHours, A_DAY_HOURS - outHours, 'read-label', [
    'Medicine, label not read: cool for 2 h in a shut refrigerator (Santa Clara County)',
    'Without power for a day or more: replace (CDC)',
  ]);
}

/** Frozen medicine is a question for the pharmacist at once. Our estimate; published for insulin. */
const frozenOr = (medicine: Medicine | null | undefined, atRiskHours: number): number =>
  medicine?.frozen ? 0 : atRiskHours;

/** Milk and opened formula follow the refrigerator, and are looked at from 2 h (CDC: formula 2 h). */
function milkHours(facts: FactsInHours): ClockHours {
  const food = freshFoodHours(facts);
  const lookedAtHours = facts.time.wallAfter(COOL_HOURS);
  return {
    ...food,
    atRiskHours: Math.min(food.atRiskHours, lookedAtHours),
    earliestHours: Math.min(food.earliestHours, lookedAtHours),
    reasons: [...food.reasons, 'Milk or formula: looked at from 2 h (CDC)'],
    advice: 'milk-or-formula',
  };
}

/** No measurement says how medicine warms: its limit is what is likely, and its risk what is possible. */
function clock(
  atRiskHours: number,
  lostHours: number | null,
  advice: ClockHours['advice'],
  reasons: readonly string[],
): ClockHours {
  const lost = lostHours === null ? null : Math.max(0, lostHours);
  const atRisk = Math.max(0, Math.min(atRiskHours, lost ?? atRiskHours));
  return {
    atRiskHours: atRisk,
    earliestHours: atRisk,
    likelyHours: lost,
    lostHours: lost,
    overrunHours: [],
    reasons,
    advice,
  };
}
