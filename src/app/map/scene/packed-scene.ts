import type { LonLat } from '@shared/contract/common';
import type { CallMark, DrawnMark, Press } from '../call-mark';
import type { PocketShape } from '../paint-pockets';
import type { ProposedRoute, RouteLeg, RouteShape } from '../route-shape';
import { Way } from '../way';
import type { MapScene } from './map-scene';

/**
 * A scene on its way to the thread that draws it. Copying objects by the thousand would hold up the
 * page, so calls travel as columns of numbers, ways once each, and of everything else what is drawn.
 */
export type SceneChanges = Partial<
  Omit<MapScene, 'marks' | 'routes' | 'proposal'> & {
    readonly marks: PackedMarks;
    readonly ways: PackedWays;
    readonly routes: readonly PackedRoute<RouteShape>[];
    readonly proposal: readonly PackedRoute<ProposedRoute>[];
  }
>;

export interface PackedMarks {
  /** x and y by turns. */
  readonly places: Float64Array;
  readonly numbers: Float64Array;
  /** Kind, press, on a route, danger: one byte each. */
  readonly looks: Uint8Array;
}

/** The ways that routes lead along. */
export interface PackedWays {
  /** All that are in use; the others may be forgotten. */
  readonly used: readonly number[];
  /** Longitudes and latitudes by turns, of those that were not there before. */
  readonly fresh: ReadonlyMap<number, Float64Array>;
}

type PackedRoute<R extends { readonly legs: readonly RouteLeg[] }> = Omit<R, 'legs'> & {
  readonly legs: readonly PackedLeg[];
};
type PackedLeg = Omit<RouteLeg, 'way'> & { readonly way: number | null };

const KINDS: readonly DrawnMark['kind'][] = [
  'fresh-food',
  'freezer',
  'medicine',
  'commercial-stock',
];
const PRESSES: readonly Press[] = ['now', 'soon', 'later', 'none'];

export function packMarks(marks: readonly CallMark[]): PackedMarks {
  const places = new Float64Array(marks.length * 2);
  const numbers = new Float64Array(marks.length);
  const looks = new Uint8Array(marks.length * 4);
  marks.forEach(({ x, y, call, kind, press, isOnRoute }, i) => {
    places[2 * i] = x;
    places[2 * i + 1] = y;
    numbers[i] = call.number;
    looks[4 * i] = KINDS.indexOf(kind);
    looks[4 * i + 1] = PRESSES.indexOf(press);
    looks[4 * i + 2] = Number(isOnRoute);
    looks[4 * i + 3] = Number(call.danger);
  });
  return { places, numbers, looks };
}

export const unpackMarks = ({ places, numbers, looks }: PackedMarks): DrawnMark[] =>
  Array.from(numbers, (number, i) => ({
    x: places[2 * i]!,
    y: places[2 * i + 1]!,
    kind: KINDS[looks[4 * i]!]!,
    press: PRESSES[looks[4 * i + 1]!]!,
    isOnRoute: looks[4 * i + 2] === 1,
    call: { number, danger: looks[4 * i + 3] === 1 },
  }));

/** Says what the thread does not know yet. One for each thread. */
export class ScenePacker {
  private sent: Partial<MapScene> = {};
  private readonly numbers = new Map<Way, number>();
  private lastNumber = 0;

  changesTo(scene: MapScene): SceneChanges {
    const { sent } = this;
    const isNew = (part: keyof MapScene): boolean => scene[part] !== sent[part];
    const hasNewWays = isNew('routes') || isNew('proposal');
    const ways = hasNewWays ? this.packWays(scene) : null;
    this.sent = scene;
    return {
      ...(isNew('marks') && { marks: packMarks(scene.marks) }),
      ...(isNew('areas') && { areas: scene.areas.map(drawnArea) }),
      ...(isNew('stormRoads') && { stormRoads: scene.stormRoads.map(drawnStormRoad) }),
      ...(isNew('pockets') && { pockets: scene.pockets.map(drawnPocket) }),
      ...(isNew('towns') && { towns: scene.towns }),
      ...(ways && {
        ways,
        routes: scene.routes.map((route) => ({
          ...route,
          technician: { id: route.technician.id },
          legs: this.packLegs(route.legs),
        })),
        proposal: scene.proposal.map((route) => ({ ...route, legs: this.packLegs(route.legs) })),
      }),
      hasRoutes: scene.hasRoutes,
      hasTechnicians: scene.hasTechnicians,
      chosenPocketKey: scene.chosenPocketKey,
      chosenTechnicianId: scene.chosenTechnicianId,
    };
  }

  private packWays({ routes, proposal }: MapScene): PackedWays {
    const used = new Set(
      [...routes, ...proposal].flatMap(({ legs }) => legs.flatMap(({ way }) => way ?? [])),
    );
    for (const way of this.numbers.keys()) if (!used.has(way)) this.numbers.delete(way);
    const fresh = new Map<number, Float64Array>();
    for (const way of used) {
      if (this.numbers.has(way)) continue;
      this.numbers.set(way, ++this.lastNumber);
      fresh.set(this.lastNumber, Float64Array.from(way.line.flat()));
    }
    return { used: [...this.numbers.values()], fresh };
  }

  private packLegs(legs: readonly RouteLeg[]): PackedLeg[] {
    return legs.map((leg) => ({
      ...leg,
      way: leg.way ? (this.numbers.get(leg.way) ?? null) : null,
    }));
  }
}

const drawnArea = ({ area: { id, name, backAt }, rings, times }: MapScene['areas'][number]) => ({
  area: { id, name, backAt },
  rings,
  times,
});

const drawnStormRoad = ({ road, ...mark }: MapScene['stormRoads'][number]) => ({
  ...mark,
  road: { id: road.id, kind: road.kind, speedShare: road.speedShare },
});

const drawnPocket = ({ pocket, ...shape }: PocketShape): PocketShape => ({
  ...shape,
  pocket: { key: pocket.key },
});

/** Puts a scene together again from what has changed. */
export class SceneUnpacker {
  private ways = new Map<number, Way>();

  constructor(private scene: MapScene<DrawnMark>) {}

  take({ marks, ways, routes, proposal, ...others }: SceneChanges): MapScene<DrawnMark> {
    if (ways) this.takeWays(ways);
    this.scene = {
      ...this.scene,
      ...others,
      ...(marks && { marks: unpackMarks(marks) }),
      ...(routes && { routes: routes.map((one) => ({ ...one, legs: this.legs(one.legs) })) }),
      ...(proposal && { proposal: proposal.map((one) => ({ ...one, legs: this.legs(one.legs) })) }),
    };
    return this.scene;
  }

  private takeWays({ used, fresh }: PackedWays): void {
    const known = this.ways;
    this.ways = new Map(
      used.flatMap((number): [number, Way][] => {
        const line = fresh.get(number);
        const way = line ? new Way(lineOf(line)) : known.get(number);
        return way ? [[number, way]] : [];
      }),
    );
  }

  private legs(legs: readonly PackedLeg[]): RouteLeg[] {
    return legs.map((leg) => ({
      ...leg,
      way: leg.way === null ? null : (this.ways.get(leg.way) ?? null),
    }));
  }
}

const lineOf = (flat: Float64Array): LonLat[] =>
  Array.from({ length: flat.length / 2 }, (_, i) => [flat[2 * i]!, flat[2 * i + 1]!]);
