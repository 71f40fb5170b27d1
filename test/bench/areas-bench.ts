import path from 'node:path';
import { lastBack } from '@shared/domain/outage-area';
import { shapeFinder, shapesOverlap } from '@shared/domain/outage-shape';
import { HOUR_MS } from '@shared/domain/instant';
import { shapeOfFeeders } from '../../server/areas/feeder-shape';
import { ensureDemoRegion } from '../../server/region/demo-region';
import { openRegion } from '../../server/region/open-region';
import { readAddressBook } from '../../server/region/region-data';
import { spread } from './quantiles';

const CALLS = 5000;
const ROUNDS = 30;
const OUT_AT = 1_800_000_000_000;

/**
 * Which outage area counts at each of 5,000 calls, when every feeder of the demo county is an area and
 * every substation is one around its feeders; and what the ground of many feeders costs to join.
 */
async function main(): Promise<void> {
  const imported = await ensureDemoRegion(path.resolve('tiles'));
  const { power } = await openRegion(imported);
  const { addresses } = await readAddressBook(imported.folder);
  const step = Math.floor(addresses.length / CALLS);
  const places = addresses.filter((_, i) => i % step === 0).slice(0, CALLS);
  const substations = [...new Set(power.feeders.map(({ substation }) => substation))];
  const joins: number[] = [];
  const areas = [
    ...power.feeders.map(({ polygons }, i) => ({
      shape: polygons,
      outAt: OUT_AT,
      backAt: i % 4 === 0 ? null : OUT_AT + i * HOUR_MS,
    })),
    ...substations.map((substation) => {
      const ids = power.feeders.filter((one) => one.substation === substation).map(({ id }) => id);
      const began = performance.now();
      const shape = shapeOfFeeders(power, ids);
      joins.push(performance.now() - began);
      return { shape, outAt: OUT_AT, backAt: OUT_AT + HOUR_MS };
    }),
  ];

  const finding: number[] = [];
  const overlapping: number[] = [];
  let inside = 0;
  for (let round = 0; round <= ROUNDS; round++) {
    let began = performance.now();
    const around = shapeFinder(areas);
    inside = places.filter(({ at }) => lastBack(around([at[0], at[1]])) !== null).length;
    // The first round also warms the thread.
    if (round > 0) finding.push(performance.now() - began);
    began = performance.now();
    const one = areas[round % areas.length];
    if (one) areas.filter(({ shape }) => shapesOverlap(one.shape, shape));
    if (round > 0) overlapping.push(performance.now() - began);
  }
  process.stdout.write(
    JSON.stringify({
      calls: places.length,
      areas: areas.length,
      points: areas
        .flatMap(({ shape }) => shape.flat())
        .reduce((sum, ring) => sum + ring.length, 0),
      inside,
      areaOfAllCallsMs: spread(finding),
      overlapsOfOneAreaMs: spread(overlapping),
      joinFeedersOfSubstationMs: spread(joins),
    }),
  );
}

void main();
