import type { SettingField, SettingGroup } from './settings-fields';

const OUR_ESTIMATE = 'Our estimate, no source.';

const number = (
  key: SettingField['key'],
  label: string,
  unit: string,
  [least, most]: readonly [number, number],
  meaning: string,
  isWhole = false,
): SettingField => ({
  key,
  label,
  kind: 'number',
  unit,
  least,
  most,
  ...(isWhole ? { isWhole } : {}),
  meaning,
  source: OUR_ESTIMATE,
});

/** What a plan weighs against the food and medicine that it saves; these may be tried on the routes. */
export const PRICE_FIELDS: readonly SettingField[] = [
  number(
    'driveDollarsPerHour',
    'An hour of driving',
    '$',
    [0, 500],
    'Higher: fewer miles, and less saved far away.',
  ),
  number(
    'waitDollarsPerHour',
    'An hour of waiting',
    '$',
    [0, 100],
    'Of an ordinary call; one with food that can be saved counts twice, with medicine as below.',
  ),
  number(
    'lateDollars',
    'A promised window missed',
    '$',
    [0, 1000],
    'Once for each visit that begins after the window its customer was told.',
  ),
  number(
    'lateDollarsPerHour',
    'An hour of lateness',
    '$',
    [0, 1000],
    'After the promised window, on top of that.',
  ),
  number(
    'overtimeDollarsPerHour',
    'An hour of overtime',
    '$',
    [0, 1000],
    'From the end of a shift until the technician is home.',
  ),
  number(
    'mostOvertimeMinutes',
    'Overtime at most',
    'min',
    [0, 240],
    'No route is planned to run longer past the end of its shift.',
    true,
  ),
  number(
    'leftOutDollars',
    'A call on no route',
    '$',
    [0, 5000],
    'On top of what is lost there; times the weight of its food or medicine.',
  ),
  number(
    'medicineWeight',
    'A medicine counts',
    'times its value',
    [1, 100],
    'Moves calls with medicine up in the queue and on the routes.',
  ),
  number(
    'householdWeight',
    'Where somebody can do less without',
    'times its value',
    [1, 10],
    'Everything in a household that was marked so at intake counts so much more, in the queue and on the routes.',
  ),
  number(
    'otherTechnicianDollars',
    'Another technician',
    '$',
    [0, 500],
    'For a stop soon to come that changes hands. Higher: calmer routes.',
  ),
  number(
    'otherTimeDollars',
    'Another time',
    '$',
    [0, 500],
    'For a stop soon to come that moves by more than the minutes below.',
  ),
  number(
    'otherTimeMinutes',
    'Another time is a move by more than',
    'min',
    [5, 240],
    'A smaller move is the same promise.',
    true,
  ),
  number(
    'promisedAheadMinutes',
    'Soon to come means within',
    'min',
    [0, 720],
    'Stops later than this may change at no price.',
    true,
  ),
  number(
    'changesPerHour',
    'Changes for a technician, at most',
    'an hour',
    [0, 99],
    'Once publications have changed so many of their stops, those soon to come stay.',
    true,
  ),
];

export const PLAN_GROUPS: readonly SettingGroup[] = [
  { title: 'What a plan weighs', fields: PRICE_FIELDS },
  {
    title: 'Routes by themselves',
    fields: [
      {
        key: 'automaticRoutes',
        label: 'Automatic mode',
        kind: 'choice',
        choices: [
          { value: 'off', label: 'Off' },
          { value: 'propose', label: 'Proposes' },
          { value: 'publish', label: 'Publishes within the limits below' },
        ],
        unit: '',
        meaning:
          'After each event (a new call, a finish, a delay, a closed road, a shift) routes are planned anew. Accepted and locked stops never move.',
        source: '',
      },
      number(
        'automaticGainDollars',
        'Only if it gains at least',
        '$',
        [0, 10_000],
        'By the weights above, the price of what changes for people counted.',
      ),
      number(
        'automaticKeepMinutes',
        'Nothing is moved that begins within',
        'min',
        [0, 480],
        'Whoever waits for a visit so near has prepared for it.',
        true,
      ),
    ],
  },
];
