import type { Instant } from '@shared/domain/instant';
import { instantOnWall } from '../intake/wall-clock';

export interface FileTimes {
  readonly outAt: Instant | null;
  readonly backAt: Instant | null;
}

/** Names of properties, without case, spaces and signs. Our choice of plain words; no format has them. */
const OUT = [
  'outat',
  'poweroutat',
  'powerout',
  'powerwent',
  'outsince',
  'startedat',
  'start',
  'starttime',
];
const BACK = [
  'backat',
  'powerbackat',
  'powerback',
  'cameback',
  'restoredat',
  'restored',
  'end',
  'endtime',
];

/** When the power went and came back, as far as the properties tell in a way that can be relied on. */
export function timesIn(
  properties: Readonly<Record<string, unknown>>,
  now: Instant,
  zone: string,
): { readonly times: FileTimes; readonly notes: readonly string[] } {
  const notes: string[] = [];
  const find = (names: readonly string[], what: string): Instant | null => {
    for (const [key, value] of Object.entries(properties)) {
      if (!names.includes(key.toLowerCase().replace(/[^a-z]/g, ''))) continue;
      if (value === null || value === '' || typeof value === 'boolean') continue;
      const at = momentOf(value, zone);
      if (at === null) notes.push(`${what} could not be read: ${shown(value)}`);
      else if (at > now) notes.push(`${what} is still to come and is left out: ${shown(value)}`);
      else return at;
    }
    return null;
  };
  const outAt = find(OUT, 'when the power went');
  const backAt = find(BACK, 'when it came back');
  if (outAt !== null && backAt !== null && backAt <= outAt) {
    notes.push('it would have come back before it went; both times are left out');
    return { times: { outAt: null, backAt: null }, notes };
  }
  return { times: { outAt, backAt }, notes };
}

const shown = (value: unknown): string => JSON.stringify(value).slice(0, 40);

/** Seconds of the last decades have ten digits, milliseconds thirteen. */
const LEAST_SECONDS = 1e8;
const LEAST_MILLISECONDS = 1e11;

function momentOf(value: unknown, zone: string): Instant | null {
  if (typeof value === 'number') {
    if (value >= LEAST_MILLISECONDS) return Math.round(value);
    return value >= LEAST_SECONDS ? Math.round(value * 1000) : null;
  }
  if (typeof value !== 'string') return null;
  const text = value.trim();
  const local = /^(\d{4})-(\d\d)-(\d\d)[T ](\d\d):(\d\d)(?::\d\d(?:\.\d+)?)?$/.exec(text);
  if (local) {
    const [year, month, day, hour, minute] = local.slice(1).map(Number) as [
      number,
      number,
      number,
      number,
      number,
    ];
    if (month < 1 || month > 12 || day < 1 || day > 31 || hour > 23 || minute > 59) return null;
    return instantOnWall({ year, month, day, hour, minute }, zone);
  }
  // With its offset, as RFC 3339 writes it; whatever else a browser may read is a guess.
  if (!/^\d{4}-\d\d-\d\d[T ]\d\d:\d\d(:\d\d(\.\d+)?)?(Z|[+-]\d\d:?\d\d)$/i.test(text)) return null;
  const at = Date.parse(text.replace(' ', 'T'));
  return Number.isNaN(at) ? null : at;
}
