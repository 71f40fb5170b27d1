import type { LonLat } from '@shared/contract/common';
import { thinned } from '@shared/domain/thin-line';
import type { RoadConditions } from '@shared/domain/roads/conditions';
import type { RoadsPort } from '../workers/ports';

type Line = LonLat[] | null;
type Drive = readonly [from: LonLat, to: LonLat];

/** Closer than this nobody sees on the closest map. */
const TRUE_TO_METRES = 1.5;
/** Some thousand drives of a storm's routes; the oldest go first. */
const MOST_KEPT = 5000;

/** The ways found under the conditions in force; other conditions begin anew. */
const kept = new WeakMap<RoadConditions, Map<string, Line>>();

/** The way of each drive along the roads; drives that follow on each other are asked for together. */
export async function roadLines(
  roads: RoadsPort | null,
  drives: readonly Drive[],
): Promise<Line[]> {
  if (!roads) return drives.map(() => null);
  const known = kept.get(roads.followed) ?? new Map<string, Line>();
  kept.set(roads.followed, known);
  const missing = drives.filter((drive) => !known.has(String(drive)));
  for (const chain of chainsOf(missing)) {
    const stops = [chain[0]![0], ...chain.map(([, to]) => to)];
    const legs = await roads.path(stops);
    chain.forEach((drive, i) => {
      const line = legs[i]?.line;
      known.set(
        String(drive),
        line && line.length > 1
          ? thinned(line, TRUE_TO_METRES).map(([lon, lat]): LonLat => [short(lon), short(lat)])
          : null,
      );
    });
  }
  const lines = drives.map((drive) => known.get(String(drive)) ?? null);
  for (const key of known.keys()) {
    if (known.size <= MOST_KEPT) break;
    known.delete(key);
  }
  return lines;
}

/** Five decimals are a metre. */
const short = (degrees: number): number => Math.round(degrees * 1e5) / 1e5;

function chainsOf(drives: readonly Drive[]): Drive[][] {
  const chains: Drive[][] = [];
  for (const drive of drives) {
    const chain = chains.at(-1);
    if (chain && String(chain.at(-1)?.[1]) === String(drive[0])) chain.push(drive);
    else chains.push([drive]);
  }
  return chains;
}
