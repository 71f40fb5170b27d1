import type { AddressPoint } from '../address-points';
import { fillCities } from '../fill-cities';
import type { LonLat } from '../osm-extract';
import type { AddressFileReport } from '../region-data';
import { UnreadableRegion } from '../unreadable-region';
import { checkRow, isOffTheGlobe } from './check-row';
import { AddressMerge } from './merge-addresses';
import { readAddressFile, TO_DEGREES } from './read-address-file';

/** Rejected rows that are kept with their lines; the rest are only counted. */
const MOST_LISTED = 1_000;
/** When all of the first rows are in feet or metres, so is the file. */
const ROWS_TO_JUDGE_BY = 50;

export interface TakenFile {
  readonly addresses: readonly AddressPoint[];
  readonly report: AddressFileReport;
}

/**
 * Merges a file of address points with those of the extract.
 *
 * @param townAt names the town of a place whose row names none
 * @throws UnreadableRegion when nothing of the file can be used
 */
export async function takeAddressFile(
  path: string,
  own: readonly AddressPoint[],
  box: readonly [number, number, number, number],
  townAt: (at: LonLat) => string,
): Promise<TakenFile> {
  const merge = new AddressMerge(own);
  const rejected: { line: number; reason: string }[] = [];
  const reasons = new Map<string, number>();
  let rows = 0;
  let rejectedCount = 0;
  let projected = 0;
  for await (const row of readAddressFile(path)) {
    rows++;
    const checked = 'reason' in row ? row.reason : checkRow(row.cells, box);
    if (typeof checked !== 'string') {
      merge.add(checked);
      continue;
    }
    rejectedCount++;
    reasons.set(checked, (reasons.get(checked) ?? 0) + 1);
    if (rejected.length < MOST_LISTED) rejected.push({ line: row.line, reason: checked });
    if ('cells' in row && isOffTheGlobe(Number(row.cells.lon), Number(row.cells.lat))) projected++;
    if (projected === rows && rows >= ROWS_TO_JUDGE_BY) throw inFeet();
  }
  if (rows === 0) throw new UnreadableRegion('The address file holds no rows.');
  if (projected === rows) throw inFeet();
  if (rejectedCount === rows) {
    const [reason] = [...reasons].sort((a, b) => b[1] - a[1])[0] ?? [''];
    throw new UnreadableRegion(
      `No row of the address file can be used; of most, ${reason}. Is it for the same county as the extract?`,
    );
  }
  const { addresses, ...counts } = merge.finish();
  const filled = fillCities(addresses, townAt);
  const nameless = (points: readonly AddressPoint[]): number =>
    points.filter(({ city }) => city === '').length;
  return {
    addresses: filled,
    report: {
      rows,
      ...counts,
      citiesFilled: nameless(addresses) - nameless(filled),
      rejectedCount,
      rejected,
      reasons: Object.fromEntries(reasons),
    },
  };
}

const inFeet = (): UnreadableRegion =>
  new UnreadableRegion(
    `The coordinates of the address file are no degrees; they look like feet or metres of a grid. ${TO_DEGREES}`,
  );
