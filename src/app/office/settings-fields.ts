import type { Settings } from '@shared/contract/office';
import { formatPhone } from '@shared/domain/phone-number';
import { phoneOf, phoneTrouble } from '../ui/phone-entry';
import { PLAN_GROUPS } from './plan-settings';

/** What was measured is switched where it is shown, and the store is a place on the map. */
export const NOT_IN_FIELDS = [
  'version',
  'usesMeasuredSpeeds',
  'measuredFrom',
  'usesMeasuredVisits',
  'shopPlace',
] as const;
export type SettingKey = Exclude<keyof Settings, (typeof NOT_IN_FIELDS)[number]>;

export interface SettingField {
  readonly key: SettingKey;
  readonly label: string;
  readonly kind: 'text' | 'phone' | 'number' | 'time' | 'choice';
  readonly unit: string;
  readonly least?: number;
  readonly most?: number;
  readonly isWhole?: boolean;
  /** With `choice`. */
  readonly choices?: readonly { readonly value: string; readonly label: string }[];
  readonly meaning: string;
  /** Where the value that it starts with comes from. */
  readonly source: string;
}

const OUR_ESTIMATE = 'Our estimate, no source.';
const FCC =
  '47 CFR 64.1200(c)(1) (FCC) allows solicitations by telephone from 8 a.m. to 9 p.m. where the ' +
  'called party is. These texts are no solicitations; the same hours are kept out of courtesy.';

/** Hours are those of the road graph; a test holds the words to them. */
function percentField(
  key: SettingKey,
  label: string,
  least: number,
  most: number,
  what: string,
): SettingField {
  return {
    key,
    label,
    kind: 'number',
    unit: `% ${what}`,
    least,
    most,
    isWhole: true,
    meaning:
      key === 'stormPercent'
        ? 'Wet roads, branches and traffic lights without power, on every road that is open.'
        : 'The usual speed is that of the road’s class, or the posted limit where that is lower.',
    source: OUR_ESTIMATE,
  };
}

function valueField(key: SettingKey, label: string): SettingField {
  return {
    key,
    label,
    kind: 'number',
    unit: '$',
    least: 0,
    most: 100_000,
    isWhole: true,
    meaning:
      key === 'valueMedicine'
        ? 'Worth until somebody says otherwise, on any call taken from now on.'
        : 'Worth of a unit of usual size, three quarters full, until somebody says otherwise; it goes with size and fill.',
    source:
      'Our estimate. Weak figures only: a household loses "$200 to $600" (a food site, no method); home insurance commonly covers $500 of spoiled food.',
  };
}

export interface SettingGroup {
  readonly title: string;
  readonly fields: readonly SettingField[];
}

/** Every setting in plain words. The ranges are the contract's; a test holds them to it. */
export const SETTING_GROUPS: readonly SettingGroup[] = [
  {
    title: 'The company',
    fields: [
      {
        key: 'companyName',
        label: 'Name of the company',
        kind: 'text',
        unit: '',
        meaning: 'Texts to customers begin with it.',
        source: '',
      },
      {
        key: 'companyPhone',
        label: 'Number to ring',
        kind: 'phone',
        unit: '',
        meaning: 'Customers are told to ring it.',
        source: '',
      },
    ],
  },
  {
    title: 'Texts to customers',
    fields: [
      {
        key: 'etaMovedMinutes',
        label: 'Tell of an arrival that moves by more than',
        kind: 'number',
        unit: 'min',
        least: 5,
        most: 180,
        isWhole: true,
        meaning: 'Fewer minutes mean more texts.',
        source: OUR_ESTIMATE,
      },
      {
        key: 'quietFromMinute',
        label: 'Quiet hours from',
        kind: 'time',
        unit: '',
        meaning: 'No text from here on, unless a visit is on its way.',
        source: FCC,
      },
      {
        key: 'quietUntilMinute',
        label: 'Quiet hours until',
        kind: 'time',
        unit: '',
        meaning: 'What waited is sent then.',
        source: 'The same rule as for their beginning.',
      },
    ],
  },
  {
    title: 'The desk',
    fields: [
      {
        key: 'claimMinutes',
        label: 'A claim on a call ends after',
        kind: 'number',
        unit: 'min',
        least: 2,
        most: 60,
        isWhole: true,
        meaning: 'Without a further step; then another dispatcher may take the call.',
        source: OUR_ESTIMATE,
      },
    ],
  },
  {
    title: 'What is lost, and how it is weighed',
    fields: [
      {
        key: 'reachMinutes',
        label: 'Somebody could be there in',
        kind: 'number',
        unit: 'min',
        least: 0,
        most: 1440,
        isWhole: true,
        meaning:
          'Urgency is what is lost per minute around that moment, for what only a visit can save.',
        source: OUR_ESTIMATE,
      },
      valueField('valueFreshFood', 'Fresh food of a refrigerator'),
      valueField('valueFreezerSection', 'Freezer section of a refrigerator'),
      valueField('valueUprightFreezer', 'Upright freezer'),
      valueField('valueChestFreezer', 'Chest freezer'),
      valueField('valueMedicine', 'Medicine'),
      valueField('valueStock', 'Stock of a walk-in'),
    ],
  },
  {
    title: 'Driving and visits',
    fields: [
      {
        key: 'speedMph',
        label: 'Driving speed',
        kind: 'number',
        unit: 'mph',
        least: 5,
        most: 80,
        meaning: 'On average, from door to door.',
        source: 'Our estimate for town and country roads after a storm; your own times replace it.',
      },
      {
        key: 'circuity',
        label: 'Road distance',
        kind: 'number',
        unit: '× straight line',
        least: 1,
        most: 3,
        meaning: 'How much longer the road is than the straight line.',
        source:
          'Ballou, Rahardja and Sakai, Transportation Research Part A 36(9), 2002, give 1.20 for ' +
          'the US (from memory). Coasts run higher, and the cautious side promises less.',
      },
      {
        key: 'serviceMinutes',
        label: 'Time at a stop',
        kind: 'number',
        unit: 'min',
        least: 5,
        most: 480,
        isWhole: true,
        meaning: 'From arrival to departure, on average.',
        source: 'Our estimate, no source; your own times replace it.',
      },
      {
        key: 'furtherUnitPercent',
        label: 'Each further unit adds',
        kind: 'number',
        unit: '% of that',
        least: 0,
        most: 100,
        isWhole: true,
        meaning: 'The way, the talk and the tools are there already.',
        source: OUR_ESTIMATE,
      },
      {
        key: 'shopMinutes',
        label: 'A stop at the store takes',
        kind: 'number',
        unit: 'min',
        least: 1,
        most: 120,
        isWhole: true,
        meaning: 'Where vans fetch parts that they lack.',
        source: OUR_ESTIMATE,
      },
    ],
  },
  ...PLAN_GROUPS,
  {
    title: 'Speeds on the road',
    fields: [
      percentField('morningPercent', 'Morning, 6:00 to 9:00', 40, 130, 'of the usual speed'),
      percentField('dayPercent', 'Day, 9:00 to 16:00', 40, 130, 'of the usual speed'),
      percentField('eveningPercent', 'Evening, 16:00 to 19:00', 40, 130, 'of the usual speed'),
      percentField('nightPercent', 'Night, 19:00 to 6:00', 40, 130, 'of the usual speed'),
      percentField('stormPercent', 'In a storm, at any hour', 30, 100, 'of that again'),
    ],
  },
  {
    title: 'Pockets on the map',
    fields: [
      {
        key: 'pocketKm',
        label: 'Calls are neighbours within',
        kind: 'number',
        unit: 'km',
        least: 0.1,
        most: 10,
        meaning: 'Neighbours of neighbours belong to the same pocket.',
        source: OUR_ESTIMATE,
      },
      {
        key: 'pocketCalls',
        label: 'A pocket begins with',
        kind: 'number',
        unit: 'calls',
        least: 2,
        most: 50,
        isWhole: true,
        meaning: 'Fewer calls stay single dots.',
        source: OUR_ESTIMATE,
      },
    ],
  },
];

export const SETTING_FIELDS: readonly SettingField[] = SETTING_GROUPS.flatMap(
  ({ fields }) => fields,
);

/** How a setting stands in its field. */
export function settingText(field: SettingField, settings: Settings): string {
  const value = settings[field.key];
  if (field.kind === 'time' && typeof value === 'number') return timeText(value);
  return field.kind === 'phone' ? formatPhone(String(value)) : String(value);
}

/** What is wrong with a field's text, in words; `null` when nothing is. */
export function settingFault(field: SettingField, text: string): string | null {
  switch (field.kind) {
    case 'text':
      if (text.trim() === '') return 'A name is needed.';
      return text.trim().length > 80 ? 'At most 80 characters.' : null;
    case 'phone':
      return phoneTrouble(text) || null;
    case 'time':
      return minutesOf(text) === null ? 'A time is needed, as in 21:00.' : null;
    case 'choice':
      return field.choices?.some(({ value }) => value === text) ? null : 'Choose one.';
    case 'number': {
      const value = numberOf(text);
      const { least = 0, most = Infinity } = field;
      if (value === null || value < least || value > most)
        return `A number from ${least} to ${most} is needed.`;
      return field.isWhole && !Number.isInteger(value) ? 'Whole numbers only.' : null;
    }
  }
}

/** The value that a field's text means; only for texts without a fault. */
export function settingValue(field: SettingField, text: string): string | number {
  switch (field.kind) {
    case 'text':
      return text.trim();
    case 'choice':
      return text;
    case 'phone':
      return phoneOf(text) ?? text;
    case 'time':
      return minutesOf(text) ?? 0;
    case 'number':
      return numberOf(text) ?? 0;
  }
}

function numberOf(text: string): number | null {
  const value = Number(text.trim().replace(',', '.'));
  return text.trim() === '' || !Number.isFinite(value) ? null : value;
}

function minutesOf(text: string): number | null {
  const [, hours, minutes] = /^(\d{1,2}):(\d{2})$/.exec(text.trim()) ?? [];
  if (hours === undefined || minutes === undefined) return null;
  const at = Number(hours) * 60 + Number(minutes);
  return Number(hours) < 24 && Number(minutes) < 60 ? at : null;
}

const timeText = (minutes: number): string =>
  `${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`;
