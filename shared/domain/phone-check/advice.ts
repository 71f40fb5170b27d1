import type { UnitKind } from '../cold-unit';
import { CAUTIONS } from './cautions';
import type { DangerId } from './dangers';
import type { CheckOutcome, CheckUnit, Heard, Referral } from './question';
import { sourced, type Sourced } from './sources';

/** Dangers in which nobody should hear about food: the stop words are all that is said. */
const PEOPLE_FIRST: ReadonlySet<DangerId> = new Set([
  'fire',
  'burning-smell',
  'downed-line',
  'generator-indoors',
  'standing-water',
]);

/**
 * What to tell the customer at the end, each sentence with its source. It never says that food is
 * safe: it says which published limit there is.
 */
export function adviceFor(
  outcome: CheckOutcome | null,
  danger: DangerId | null,
  referTo: Referral | null,
  heard: Heard,
  unit: CheckUnit,
): readonly Sourced[] {
  if (outcome === null || (danger !== null && PEOPLE_FIRST.has(danger))) return [];
  return [
    ...nextSteps(outcome, danger, referTo, heard),
    ...(outcome === 'running-again' ? [] : keepCold(unit.kind)),
    ...contents(unit.kind, heard),
  ];
}

function nextSteps(
  outcome: CheckOutcome,
  danger: DangerId | null,
  referTo: Referral | null,
  heard: Heard,
): readonly Sourced[] {
  const steps: Sourced[] = [];
  if (outcome === 'running-again') {
    steps.push(
      sourced('Leave the door shut for 24 hours so that it gets cold again.', 'ohio'),
      sourced('If it hums, clicks or gets warmer again, call us again.', 'practice'),
    );
  }
  if (outcome === 'power-still-out') {
    steps.push(
      sourced(
        'Unplug the unit. When the power has been back and steady for five minutes, plug it in and give it ten minutes.',
        'practice',
      ),
      sourced('If it stays warm after that, call us again.', 'practice'),
    );
  }
  if (outcome === 'referred' && danger === null) {
    steps.push(
      sourced(
        referTo === 'utility'
          ? 'Call the electric utility: the supply to your home is not ours to repair.'
          : 'Call a licensed electrician: house wiring is not ours to repair. Leave the unit unplugged until then.',
        'ourRule',
      ),
      sourced('When the outlet works and the unit still does not, call us again.', 'ourRule'),
    );
  }
  if (heard.said('start', 'trips') || heard.said('breaker', 'reset-tripped')) {
    steps.push(
      sourced('Leave the unit unplugged and the breaker or GFCI off. Do not reset it.', 'breaker'),
    );
  }
  if (heard.said('walk-in-reset', 'trips-again') || heard.said('gfci', 'trips-plugged')) {
    steps.push(sourced('Leave the breaker or GFCI off. Do not reset it again.', 'breaker'));
  }
  if (heard.said('other-outlet', 'yes')) {
    steps.push(
      sourced('Have an electrician see to the dead outlet; do not use it until then.', 'practice'),
    );
  }
  return steps;
}

function keepCold(kind: UnitKind): readonly Sourced[] {
  const shut = sourced(CAUTIONS['keep-shut'].words, 'fsis');
  const cooler = sourced(
    'If it will take longer than four hours, have a cooler with ice ready and keep food in it at or below 40 F.',
    'cdc',
  );
  return kind === 'walk-in' ? [shut] : [shut, cooler];
}

const FRESH_LIMIT = sourced(
  'The published limit for a closed refrigerator is four hours without cooling.',
  'fsis',
);
const FREEZER_LIMIT = sourced(
  'The published limit for a closed freezer is about 48 hours when full, about 24 when half full. Ice crystals mean that food may be refrozen.',
  'fsis',
);

function contents(kind: UnitKind, heard: Heard): readonly Sourced[] {
  const flooded = heard.said('water', 'touched')
    ? [sourced('Throw out any food that flood water has touched.', 'foodChart')]
    : [];
  const food = [
    ...flooded,
    sourced(`${CAUTIONS['throw-it-out'].words} ${CAUTIONS['never-taste'].words}`, 'fsis'),
    sourced('Questions about food: USDA Meat and Poultry Hotline, 1-888-674-6854.', 'fsisHotline'),
  ];
  switch (kind) {
    case 'refrigerator':
      return [FRESH_LIMIT, ...food];
    case 'fridge-freezer':
      return [FRESH_LIMIT, FREEZER_LIMIT, ...food];
    case 'upright-freezer':
    case 'chest-freezer':
      return [FREEZER_LIMIT, ...food];
    case 'walk-in':
      return [
        sourced(
          'Write down when cooling stopped, and the temperature every two hours from the outside display.',
          'iowaLog',
        ),
        sourced('Cold holding means 41 F or less.', 'foodCode'),
        sourced(
          'Some health authorities want to be told of an outage of two hours or more: ask yours.',
          'georgia',
        ),
        ...flooded,
      ];
    case 'medicine-fridge':
      return [
        sourced(CAUTIONS.medicine.words, 'cdcDrugs'),
        sourced(
          'Insulin keeps for up to 28 days at 59 to 86 F. Insulin that has been frozen is not used.',
          'fdaInsulin',
        ),
      ];
  }
}
