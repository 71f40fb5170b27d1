import { kinks, polygon } from '@turf/turf';
import type { FeederMap } from '@shared/contract/feeders';
import { FeederMap as FeederMapSchema } from '@shared/contract/feeders';
import { AreaShape } from '@shared/contract/areas';
import { Chance } from '../../server/demo/demo-calls';
import { isInShape, shapeFinder } from '@shared/domain/outage-shape';
import { demoCallers } from '../../server/demo/demo-callers';
import { demoOutages, outageFinder, type DemoOutage } from '../../server/demo/demo-outages';
import { ownAddresses, type AddressPoint } from '../../server/region/address-points';
import { feedersOf } from '../../server/region/feeders';
import { readExtract } from '../../server/region/osm-extract';
import { demoCountyPbf } from '../support/demo-county';

let power: FeederMap;
let addresses: AddressPoint[];

/** The feeders as an import reads them, never as the generator knows them. */
beforeAll(async () => {
  const extract = await readExtract(demoCountyPbf());
  addresses = ownAddresses(extract);
  power = feedersOf(extract, addresses);
});

const waveOf = (id: string): number => power.feeders.find((own) => own.id === id)!.wave!.order;
const median = (values: readonly number[]): number =>
  [...values].sort((a, b) => a - b)[values.length >> 1]!;

describe("the county's feeders", () => {
  it('are sixty, with names and numbers of their own, from six to eight substations', () => {
    expect(FeederMapSchema.parse(power)).toEqual(power);
    expect(power.feeders).toHaveLength(60);
    expect(new Set(power.feeders.map(({ id }) => id)).size).toBe(60);
    expect(new Set(power.feeders.map(({ name }) => name)).size).toBe(60);
    const heads = new Set(power.feeders.map(({ substation }) => substation));
    expect(heads.size).toBeGreaterThanOrEqual(6);
    expect(heads.size).toBeLessThanOrEqual(8);
    expect(power.substations.map(({ name }) => name).sort()).toEqual([...heads].sort());
  });

  it('take every address exactly once', () => {
    const around = shapeFinder(power.feeders.map(({ polygons }) => ({ shape: polygons })));
    const counts = addresses.map(({ at }) => around(at).length);
    expect(counts.filter((count) => count !== 1)).toEqual([]);
    const sum = power.feeders.reduce((total, { customers }) => total + customers, 0);
    expect(sum).toBe(addresses.length);
  });

  it('have a few dozen to some two thousand customers each', () => {
    const customers = power.feeders.map((own) => own.customers);
    expect(Math.min(...customers)).toBeGreaterThan(30);
    expect(Math.max(...customers)).toBeLessThan(2_200);
  });

  it('have outlines that do not cross themselves', () => {
    for (const { polygons } of power.feeders)
      for (const rings of polygons) expect(kinks(polygon(rings)).features).toEqual([]);
  });

  it('share borders point by point, so that nothing lies between two of them', () => {
    // Each side of an outline is met at most twice, by the two feeders beside it; both see one line.
    const sides = new Map<string, number>();
    for (const { polygons } of power.feeders)
      for (const ring of polygons.flat())
        for (let i = 1; i < ring.length; i++) {
          const key = [ring[i - 1]!.join(), ring[i]!.join()].sort().join(' ');
          sides.set(key, (sides.get(key) ?? 0) + 1);
        }
    expect(Math.max(...sides.values())).toBe(2);
    expect([...sides.values()].filter((count) => count === 2).length).toBeGreaterThan(1_000);
  });

  it('begin their main line at their substation', () => {
    const metres = ([x, y]: readonly number[], [u, v]: readonly number[]): number =>
      Math.hypot((x! - u!) * 89_701, (y! - v!) * 110_972);
    for (const { substation, trunk } of power.feeders) {
      const { at } = power.substations.find(({ name }) => name === substation)!;
      expect(Math.min(...trunk.flat().map((p) => metres(p, at)))).toBeLessThan(90);
    }
  });

  it('are repaired by wave: the hospital first, the barrier strip last', () => {
    const hours = (order: number): number[] =>
      power.feeders.flatMap(({ wave }) => (wave?.order === order ? [wave.hours] : []));
    for (let order = 1; order < 5; order++)
      expect(median(hours(order))).toBeLessThan(median(hours(order + 1)));
    expect(waveOf('STR-1')).toBe(5);
    expect(hours(1).length).toBe(1);
  });
});

describe('the outages of the demo storm', () => {
  const WENT_OUT = Date.UTC(2026, 9, 3, 3);
  const NOW = WENT_OUT + 13 * 3_600_000;
  let outages: DemoOutage[];
  beforeAll(() => {
    outages = demoOutages(power, new Chance('demo outages'), WENT_OUT, NOW);
  });

  it('are feeders and one substation, with outlines that can be drawn', () => {
    const names = new Set([
      ...power.feeders.map(({ name }) => name),
      ...power.substations.map(({ name }) => name),
    ]);
    expect(outages.every(({ name }) => names.has(name))).toBe(true);
    expect(outages.length).toBeGreaterThan(10);
    expect(outages.length).toBeLessThan(32);
    for (const { shape } of outages) {
      expect(AreaShape.safeParse(shape).success).toBe(true);
      for (const rings of shape) expect(kinks(polygon(rings)).features).toEqual([]);
    }
  });

  it('are restored in waves, and some are still out', () => {
    const back = outages.flatMap(({ backAt }) => (backAt === null ? [] : [backAt]));
    expect(back.length).toBeGreaterThan(6);
    expect(back.length).toBeLessThan(outages.length);
    expect(Math.max(...back)).toBeLessThan(NOW);
    expect(Math.min(...back)).toBeGreaterThan(WENT_OUT);
  });

  it('nest: inside the substation some stay out for longer, and that is what counts there', () => {
    const whole = outages.find(({ name }) => name.endsWith('Substation'))!;
    const outageAt = outageFinder(outages);
    const inside = addresses.flatMap(({ at }): (DemoOutage | null)[] =>
      isInShape(at, whole.shape) ? [outageAt([at[0], at[1]])] : [],
    );
    expect(inside.length).toBeGreaterThan(500);
    expect(inside).toContain(whole);
    expect(inside.some((own) => own !== whole)).toBe(true);
    expect(inside).not.toContain(null);
  });

  it('make houses ring where power is back, by the outage that counts there', () => {
    const callers = demoCallers(outages, addresses, new Chance('callers'), 240);
    const outageAt = outageFinder(outages);
    expect(callers).toHaveLength(240);
    for (const { address, outAt, backAt } of callers)
      expect(outageAt([address.at[0], address.at[1]])).toMatchObject({ outAt, backAt });
    expect(callers.some(({ backAt }) => backAt === null)).toBe(false);
    expect(demoCallers([], addresses, new Chance('callers'), 240)).toEqual([]);
  });

  it('are the same for the same chance', () =>
    expect(demoOutages(power, new Chance('demo outages'), WENT_OUT, NOW)).toEqual(outages));
});
