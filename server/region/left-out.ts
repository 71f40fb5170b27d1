import { roadClassOf } from './map-layers';
import type { OsmExtract } from './osm-extract';
import type { Tags } from './osm-model';
import type { LeftOut } from './region-data';

const namesStreet = (tags: Tags): boolean => Boolean(tags['addr:street'] ?? tags['addr:place']);

/** What of an extract cannot be used, for the result page. */
export function leftOutOf(extract: OsmExtract): LeftOut[] {
  let streetless = 0;
  let cut = 0;
  let gone = 0;
  const look = (tags: Tags): void => {
    if (tags['addr:housenumber'] && !namesStreet(tags)) streetless++;
  };
  const withStreet = new Set(
    extract.namedNodes.flatMap(({ id, tags }) => (namesStreet(tags) ? [id] : [])),
  );
  // The ends of a range of numbers have their street from its way, or from each other.
  const inRanges = new Set(
    [...extract.ways.values()].flatMap(({ tags, refs }) =>
      tags['addr:interpolation'] !== undefined &&
      (namesStreet(tags) || refs.some((ref) => withStreet.has(ref)))
        ? refs
        : [],
    ),
  );
  for (const { id, tags } of extract.namedNodes) if (!inRanges.has(id)) look(tags);
  for (const { tags, refs } of extract.ways.values()) {
    look(tags);
    if (roadClassOf(tags) === null) continue;
    const missing = refs.filter((ref) => extract.at(ref) === null).length;
    if (missing > refs.length - 2) gone++;
    else if (missing > 0) cut++;
  }
  return [
    {
      what: 'House numbers',
      count: streetless,
      why: 'they name no street',
    },
    {
      what: 'Ends of roads',
      count: cut,
      why: 'the extract was cut there and lacks their points',
    },
    { what: 'Roads', count: gone, why: 'the extract lacks all of their points, or all but one' },
  ].filter(({ count }) => count > 0);
}
