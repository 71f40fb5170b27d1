import type { CellShape, ColumnSample } from './cell-shapes';
import type { ColumnRole } from './column-map';

/** Roles that the cells alone can point at. */
export const CONTENT_ROLES: readonly ColumnRole[] = [
  'callId',
  'receivedAt',
  'receivedDate',
  'receivedTime',
  'callerName',
  'phone',
  'altPhone',
  'address',
  'streetNumber',
  'street',
  'unitNo',
  'city',
  'state',
  'postcode',
  'unitKind',
  'remarks',
  'powerOutAt',
  'powerBackAt',
  'language',
  'medicine',
];

/** How well the cells of a column fit a role, -1 to 1, and why. */
export function contentScore(role: ColumnRole, sample: ColumnSample): [number, string] {
  const share = (...shapes: CellShape[]): number =>
    shapes.reduce((sum, shape) => sum + (sample.shapes.get(shape) ?? 0), 0);
  const percent = (value: number): string => `${Math.round(value * 100)} % of its cells`;
  const when = share('time', 'date-time');
  const words = share('message', 'name', 'other', 'unit', 'street');
  switch (role) {
    case 'phone':
    case 'altPhone': {
      const phones = share('phone');
      const fill = sample.count / Math.max(sample.total, 1);
      const preferred = role === 'phone' ? fill >= 0.5 || phones === 0 : fill < 0.5;
      return [
        phones >= 0.4 ? phones - (preferred ? 0 : 0.15) : -1,
        `${percent(phones)} are telephone numbers`,
      ];
    }
    case 'receivedAt': {
      const both = share('date-time');
      return [
        both >= 0.5 ? both * (0.6 + 0.4 * sample.rising) : when >= 0.5 ? 0.1 : -1,
        `${percent(both)} are a date and a time`,
      ];
    }
    case 'receivedDate': {
      const dates = share('date');
      return [
        dates >= 0.5
          ? dates * (sample.different <= 12 ? 1 : 0.7)
          : share('date-time') > 0.3
            ? -0.6
            : -1,
        `${percent(dates)} are dates`,
      ];
    }
    case 'receivedTime': {
      const numbers = share('number');
      const compact =
        sample.compactTimes >= 0.95 && sample.rising > 0.9 && sample.counting < 0.5 ? numbers : 0;
      const times = share('time') + compact;
      return [
        times >= 0.5 ? times * (0.45 + 0.55 * sample.rising) : share('date-time') > 0.5 ? -0.3 : -1,
        `${percent(times)} are times of day`,
      ];
    }
    case 'callerName': {
      const names = share('name');
      const varied = Math.min(1, Math.max(sample.distinct * 1.4, sample.different / 12));
      return [
        names >= 0.4 ? names * varied * (sample.meanWords > 1.4 ? 1 : 0.7) : -0.7,
        `${percent(names)} look like names`,
      ];
    }
    case 'firstName':
    case 'lastName': {
      const names = share('name', 'state', 'other');
      return [names >= 0.5 ? names : -0.7, `${percent(names)} look like names`];
    }
    case 'business':
      return [
        share('name', 'other', 'message', 'unit', 'street') >= 0.5 ? 0.4 : -0.5,
        'its cells are words',
      ];
    case 'address': {
      const addresses = share('address') + share('street') * 0.5 + share('town-line') * 0.5;
      return [
        addresses >= 0.35 ? Math.min(1, addresses) : -0.8,
        `${percent(share('address', 'street', 'town-line'))} are addresses or parts of one`,
      ];
    }
    case 'streetNumber': {
      const numbers = share('number') + share('apartment') * 0.8 + share('postcode') * 0.5;
      const ordered = sample.rising > 0.9 && sample.distinct > 0.9;
      return [
        numbers >= 0.6 ? numbers * (ordered ? 0.2 : 0.7) : -0.9,
        `${percent(numbers)} are short numbers`,
      ];
    }
    case 'street': {
      const streets = share('street');
      return [
        streets >= 0.4 ? streets : share('address') > 0.4 ? -0.2 : share('name') > 0.6 ? 0.2 : -0.8,
        `${percent(streets)} are streets`,
      ];
    }
    case 'unitNo': {
      const flats = share('apartment');
      const short = share('apartment', 'number', 'state', 'other');
      return [
        flats >= 0.3 && short > 0.7
          ? 0.4 + flats * 0.5
          : short > 0.7 && sample.count < sample.total * 0.6
            ? 0.2
            : -0.7,
        `${percent(flats)} are apartments`,
      ];
    }
    case 'city': {
      const names = share('name', 'street', 'other', 'apartment', 'town-line');
      const few = sample.different <= Math.max(4, sample.count * 0.35) && sample.different <= 40;
      return [
        share('name', 'street', 'town-line') >= 0.6 && share('street') < 0.5
          ? names * (few ? 0.8 - sample.different / 100 : 0.25)
          : -0.7,
        `${sample.different} different names`,
      ];
    }
    case 'state':
      return [
        share('state') >= 0.7 ? (sample.different <= 3 ? 0.9 : 0.1) : -0.8,
        'two letters each',
      ];
    case 'postcode':
      return [
        share('postcode') >= 0.6
          ? sample.different <= Math.max(5, sample.count * 0.6)
            ? 0.95
            : 0.5
          : -0.9,
        `${percent(share('postcode'))} are postcodes`,
      ];
    case 'unitKind': {
      const units = share('unit');
      return [
        units >= 0.4 ? units : sample.namesUnits >= 0.5 ? 0.3 : units > 0.15 ? 0 : -0.7,
        `${percent(units)} name a cold unit`,
      ];
    }
    case 'remarks': {
      const messages = share('message');
      const speaks = Math.max(messages, sample.meanWords >= 3 ? words * 0.7 : 0);
      return [
        speaks >= 0.25 ? Math.min(1, speaks + 0.2) : words > 0.5 ? 0 : -0.6,
        // What spoke for it: sentences, or that its cells run to several words without being any.
        messages >= 0.25 ? `${percent(messages)} are sentences` : 'its cells run to several words',
      ];
    }
    case 'powerOutAt':
    case 'powerBackAt': {
      const back = role === 'powerBackAt' ? share('yes-no') * 0.5 + sample.stillOut : 0;
      const times = when + share('duration') + back + share('number') * 0.3;
      return [
        times >= 0.4
          ? Math.min(1, times) * (sample.stillOut > 0 && role === 'powerOutAt' ? 0.5 : 0.6)
          : words > 0.5
            ? -0.2
            : -0.6,
        when + share('duration') >= 0.25
          ? `${percent(when + share('duration'))} are times`
          : 'its cells tell how the power stands',
      ];
    }
    case 'hoursOut':
      return [
        share('number', 'duration') >= 0.5 ? 0.9 : when > 0.5 ? -0.8 : -0.2,
        'its cells are short numbers',
      ];
    case 'medicine':
    case 'danger': {
      const flagged = role === 'medicine' ? sample.medicine : sample.danger;
      const asked = share('yes-no') + flagged;
      const isOther = share('phone', 'address') > 0.3 || when > 0.3 || sample.meanWords > 3;
      return [
        asked >= 0.3 && flagged > 0 ? Math.min(1, asked) : isOther ? -1 : asked >= 0.3 ? 0.3 : 0,
        'its cells answer it',
      ];
    }
    case 'language':
      return [
        share('language') >= 0.5 ? 0.9 : share('yes-no', 'state') > 0.5 ? 0.1 : -0.5,
        `${percent(share('language'))} are languages`,
      ];
    case 'callId': {
      const numbers = share('number', 'postcode', 'apartment', 'other');
      const ordered = sample.rising > 0.95 && sample.distinct > 0.97;
      return [
        numbers >= 0.7
          ? ordered
            ? 0.9
            : 0.2
          : share('phone') > 0.5 || share('name') > 0.5
            ? -0.9
            : 0.1,
        'a number that counts up',
      ];
    }
    case 'contents':
      return [words > 0.5 ? 0.4 : -0.4, 'its cells are words'];
    case 'detail':
      return [0.2, 'kept with the message'];
    case 'ignore':
      return share('phone') > 0.5 || share('address') > 0.5
        ? [-1, '']
        : [0.3, 'says nothing of the household'];
  }
}
