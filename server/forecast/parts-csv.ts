import { stringify } from 'csv-stringify/sync';
import { DateTime } from 'luxon';
import type { PartsAheadDto } from '@shared/contract/forecast';
import { PART_WORDS } from '@shared/domain/skills';
import { safeCell } from '../office/safe-cell';

/** What to load as a table for a spreadsheet (RFC 4180): van by van, then all together. */
export function partsCsv(ahead: PartsAheadDto, zone: string): string {
  const time = (at: number): string =>
    DateTime.fromMillis(at, { zone }).toFormat('yyyy-LL-dd HH:mm');
  return stringify([
    [
      'Technician',
      'Stops',
      'Part',
      'On the van',
      'Needed on average',
      'Chance it lacks (%)',
      'Load',
    ],
    ...ahead.vans.flatMap(({ name, stops, parts }) =>
      parts.map((one) => [
        safeCell(name),
        stops,
        PART_WORDS[one.part],
        one.onVan,
        one.expected.toFixed(2),
        (one.lackChance * 100).toFixed(1),
        one.load,
      ]),
    ),
    [],
    ['Part', 'On all vans', 'Needed on routes', 'Needed by calls without a route', 'To load'],
    ...ahead.shelf.map((one) => [
      PART_WORDS[one.part],
      one.onVans,
      one.onRoutes.toFixed(1),
      one.waiting.toFixed(1),
      one.load,
    ]),
    [],
    ['As of', time(ahead.at)],
    ['Stops until', time(ahead.until)],
  ]);
}
