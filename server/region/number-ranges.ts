import { houseNumberOrder } from '@shared/domain/address/house-number';
import type { NumberRange } from './address-points';
import type { LonLat, OsmExtract } from './osm-extract';
import type { OsmWay, Tags } from './osm-model';

/** Longer ranges are slips in the data: nobody counts ten thousand houses along one line. */
const MOST_NUMBERS = 2_000;

/**
 * Ranges of house numbers from ways tagged `addr:interpolation`: each stretch between two numbered
 * nodes is one range. A way that is cut, lettered or counts by other steps than one or two is left out.
 *
 * Source of the tagging: OpenStreetMap wiki, "Key:addr:interpolation".
 */
export function numberRangesOf(extract: OsmExtract, townAt: (at: LonLat) => string): NumberRange[] {
  const ways = [...extract.ways.values()].filter((way) => stepOf(way.tags) !== null);
  if (ways.length === 0) return [];
  const wanted = new Set(ways.flatMap(({ refs }) => refs));
  const numbered = new Map(
    extract.namedNodes
      .filter(({ id, tags }) => wanted.has(id) && tags['addr:housenumber'])
      .map(({ id, tags }) => [id, tags] as const),
  );
  return ways.flatMap((way) => rangesOf(way, extract, numbered, townAt));
}

function stepOf(tags: Tags): 1 | 2 | null {
  switch (tags['addr:interpolation']) {
    case 'even':
    case 'odd':
    case '2':
      return 2;
    case 'all':
    case '1':
      return 1;
    default:
      return null;
  }
}

function rangesOf(
  way: OsmWay,
  extract: OsmExtract,
  numbered: ReadonlyMap<number, Tags>,
  townAt: (at: LonLat) => string,
): NumberRange[] {
  const ranges: NumberRange[] = [];
  let first: Tags | null = null;
  let line: LonLat[] = [];
  for (const ref of way.refs) {
    const at = extract.at(ref);
    if (!at) {
      // What lies beyond the cut is unknown, so the numbers up to it are as well.
      first = null;
      line = [];
      continue;
    }
    const tags = numbered.get(ref);
    line.push(at);
    if (!tags) continue;
    const range = first && rangeBetween(way, first, tags, line, townAt);
    if (range) ranges.push(range);
    first = tags;
    line = [at];
  }
  return ranges;
}

function rangeBetween(
  way: OsmWay,
  first: Tags,
  last: Tags,
  line: readonly LonLat[],
  townAt: (at: LonLat) => string,
): NumberRange | null {
  const said = (key: string): string => (way.tags[key] ?? first[key] ?? last[key] ?? '').trim();
  const street = said('addr:street') || said('addr:place');
  const [from, to] = [first['addr:housenumber'] ?? '', last['addr:housenumber'] ?? ''];
  const [low, high] = [houseNumberOrder(from), houseNumberOrder(to)];
  const step = stepOf(way.tags);
  if (street === '' || low === null || high === null || step === null) return null;
  if (low === high || Math.abs(high - low) > MOST_NUMBERS * step) return null;
  const isUp = low < high;
  const postcode = first['addr:postcode'] === last['addr:postcode'] ? said('addr:postcode') : '';
  return {
    street,
    city: said('addr:city') || townAt(line[0]!),
    postcode: way.tags['addr:postcode'] ?? postcode,
    from: isUp ? from : to,
    to: isUp ? to : from,
    step,
    line: isUp ? [...line] : [...line].reverse(),
  };
}
