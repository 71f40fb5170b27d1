import type { HouseAddress } from './addresses';
import { layOutCircuits, type Circuits } from './circuits';
import type { StreetGraph } from './junctions';
import { outlinesOf, type Rings } from './outlines';
import type { NamedPlace } from './places';
import { customersOf, restorations, type Restoration } from './restoration';
import { territoryOf } from './territory';
import type { Terrain } from './terrain';
import type { Town } from './towns';

/** The county's power: lists by feeder go together by number. */
export interface CountyPower extends Circuits {
  readonly outlines: readonly Rings[];
  readonly restorations: readonly Restoration[];
}

export function layOutPower(
  seed: number,
  terrain: Terrain,
  towns: readonly Town[],
  graph: StreetGraph,
  addresses: readonly HouseAddress[],
  places: readonly NamedPlace[],
): CountyPower {
  const circuits = layOutCircuits(seed, towns, graph, addresses);
  const territory = territoryOf(graph, circuits, terrain.coast);
  const count = circuits.feeders.length;
  return {
    ...circuits,
    outlines: outlinesOf(territory, count),
    restorations: restorations(
      seed,
      terrain,
      towns,
      places,
      circuits.feeders.map(({ heart }) => graph.nodes[heart]!),
      customersOf(addresses, territory, count),
      territory,
    ),
  };
}
