import { greatCircleKm } from '@shared/domain/travel/great-circle';
import { roadClassOf } from './map-layers';
import { linesOf, type OsmExtract } from './osm-extract';

/** Length of all roads that the map draws, each carriageway once, in kilometres. */
export function roadKilometres(extract: OsmExtract): number {
  let km = 0;
  for (const way of extract.ways.values()) {
    if (roadClassOf(way.tags) === null) continue;
    for (const line of linesOf(extract, way))
      for (let i = 1; i < line.length; i++) km += greatCircleKm(line[i - 1]!, line[i]!);
  }
  return Math.round(km * 10) / 10;
}
