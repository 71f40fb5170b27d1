import { houseAddresses, type HouseAddress } from './addresses';
import { layOutCountry } from './country-roads';
import { contours } from './contours';
import { ferryCrossing, type FerryCrossing } from './ferry';
import { findJunctions, type StreetGraph } from './junctions';
import { nameStreets, type StreetName } from './names';
import { makePlaces, type CountyPlaces } from './places';
import { layOutPower, type CountyPower } from './power';
import type { Point } from './plane';
import { StreetSpace, type StreetLine } from './street-line';
import { layOutDrives } from './suburb-drives';
import { layOutLanes, layOutSuburbs } from './suburbs';
import { HALF_HEIGHT, HALF_WIDTH, makeTerrain, type Terrain } from './terrain';
import { waterfront } from './town-edge';
import { layOutTown } from './town-grid';
import { placeTowns, type Town } from './towns';
import { trafficOf, type Traffic } from './traffic';

/** The invented county as the generator knows it, before it is written as OpenStreetMap data. */
export interface County {
  readonly seed: number;
  readonly terrain: Terrain;
  readonly towns: readonly Town[];
  readonly lines: readonly StreetLine[];
  readonly graph: StreetGraph;
  readonly traffic: Traffic;
  readonly ferry: FerryCrossing | null;
  readonly streetNames: ReadonlyMap<string, StreetName>;
  readonly addresses: readonly HouseAddress[];
  readonly parks: readonly Point[][];
  readonly places: CountyPlaces;
  readonly power: CountyPower;
}

/** Metres from water at which a street runs along the shore of a town. */
const WATERFRONT_CLEARANCE = 112;

/** Makes the whole county from a seed; the same seed gives the same county, bit for bit. */
export function makeCounty(seed: number): County {
  const terrain = makeTerrain(seed);
  const towns = placeTowns(seed, terrain);
  const plans = towns.map((town) => layOutTown(seed, town, terrain));
  const shore = shoreLines(terrain);
  const lines: StreetLine[] = plans.flatMap((plan) => [...plan.lines]);
  for (const town of towns) if (!town.isOnBarrier) lines.push(...waterfront(town, shore));
  const ferry = ferryCrossing(terrain);
  const country = layOutCountry(seed, towns, plans, terrain, ferry);
  lines.push(...country);

  const space = new StreetSpace();
  for (const line of lines) space.add(line.points, line.street);
  for (const town of towns) {
    lines.push(...layOutSuburbs(seed, town, terrain, space));
    lines.push(...layOutDrives(seed, town, terrain, space));
  }
  lines.push(...layOutLanes(seed, country, terrain, space));

  const graph = findJunctions(lines);
  const isBuilt = new Set(graph.stretches.map(({ line }) => line));
  const standing = lines.filter((_, index) => isBuilt.has(index));
  const streetNames = nameStreets(seed, towns, standing);
  const built = new StreetSpace();
  for (const { line, points } of graph.stretches) built.add(points, lines[line]!.street);
  const parks = plans.flatMap((plan) => [...plan.parks]);
  const addresses = houseAddresses(
    seed,
    towns,
    lines,
    (street) => streetNames.get(street)?.name ?? '',
    terrain,
    built,
    parks,
  );
  const places = makePlaces(seed, terrain, towns, lines, graph, addresses, ferry);
  return {
    seed,
    terrain,
    towns,
    lines,
    graph,
    traffic: trafficOf(seed, towns, lines, graph),
    ferry,
    streetNames,
    addresses,
    parks,
    places,
    power: layOutPower(seed, terrain, towns, graph, addresses, places.points),
  };
}

/** Lines at the waterfront's distance from water all over the county. */
function shoreLines(terrain: Terrain): Point[][] {
  const cell = 60;
  const columns = Math.floor((2 * HALF_WIDTH) / cell);
  const rows = Math.floor((2 * HALF_HEIGHT) / cell);
  const values = new Float64Array(columns * rows);
  for (let j = 0; j < rows; j++) {
    for (let i = 0; i < columns; i++) {
      values[j * columns + i] =
        terrain.clearance([i * cell - HALF_WIDTH, j * cell - HALF_HEIGHT]) - WATERFRONT_CLEARANCE;
    }
  }
  return contours({ columns, rows, cell, left: -HALF_WIDTH, bottom: -HALF_HEIGHT, values }, 0, 12);
}
