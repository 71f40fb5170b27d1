import fc from 'fast-check';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import {
  driveFault,
  LEAST_CORRECTION,
  LEAST_DRIVES,
  learnedSpeeds,
  type MeasuredDrive,
  MOST_CORRECTION,
} from '@shared/domain/roads/learned-speeds';

const NIGHT = Date.UTC(2026, 9, 3, 6);
const CLASSES = ['primary', 'secondary', 'tertiary', 'local'] as const;
type Shares = Readonly<Record<string, number>>;

const aDrive = (
  expectedSeconds: Shares,
  tookSeconds: number,
  told: Partial<MeasuredDrive> = {},
): MeasuredDrive => ({
  startedAt: NIGHT,
  arrivedAt: NIGHT + tookSeconds * 1000,
  hasStart: true,
  isPaused: false,
  expectedSeconds,
  ...told,
});

/** A ladder of numbers from 0 to 1 without a pattern that shows; the same ones for the same seed. */
function chance(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** Drives over all classes whose true speeds are `factors` times the expected ones. */
function simulated(
  factors: Readonly<Record<string, number>>,
  {
    count,
    noise,
    odd = 0,
    seed = 1,
  }: { count: number; noise: number; odd?: number; seed?: number },
): MeasuredDrive[] {
  const roll = chance(seed);
  return Array.from({ length: count }, () => {
    const expected: Record<string, number> = {};
    for (const name of CLASSES) if (roll() < 0.6) expected[name] = 60 + roll() * 600;
    if (Object.keys(expected).length === 0) expected['local'] = 300;
    let took = 0;
    for (const [name, seconds] of Object.entries(expected)) took += seconds / (factors[name] ?? 1);
    // The mean of four is bell enough.
    const bell = (roll() + roll() + roll() + roll() - 2) * Math.sqrt(3);
    const times = roll() < odd ? 2 + roll() : Math.exp(noise * bell);
    return aDrive(expected, took * times);
  });
}

describe('learnedSpeeds', () => {
  const TRUE = { primary: 0.8, secondary: 0.7, tertiary: 1.1, local: 0.9 };

  it('finds the speeds that drives with noise were made with', () => {
    for (const seed of [1, 2, 3, 4, 5]) {
      const learned = learnedSpeeds(simulated(TRUE, { count: 600, noise: 0.15, seed }));
      for (const name of CLASSES)
        expect(Math.abs(learned[name]!.factor / TRUE[name] - 1)).toBeLessThan(0.08);
    }
  });

  it('is not led astray by one drive in ten that took two or three times as long', () => {
    for (const seed of [1, 2, 3]) {
      const learned = learnedSpeeds(simulated(TRUE, { count: 600, noise: 0.1, odd: 0.1, seed }));
      for (const name of CLASSES)
        expect(Math.abs(learned[name]!.factor / TRUE[name] - 1)).toBeLessThan(0.12);
    }
  });

  it('moves towards the truth with more drives, and little with few', () => {
    const halved = (count: number): number =>
      learnedSpeeds(Array.from({ length: count }, () => aDrive({ local: 600 }, 1200)))['local']!
        .factor;
    expect(halved(LEAST_DRIVES - 1)).toBe(1);
    // 5 drives of a factor 2 beside 5 of the figure before: 1 + 1/2 times as long.
    expect(halved(5)).toBeCloseTo(1 / 1.5, 3);
    expect(halved(50)).toBeLessThan(halved(20));
    expect(halved(20)).toBeLessThan(halved(5));
    expect(halved(1000)).toBeGreaterThanOrEqual(LEAST_CORRECTION);
  });

  const anyDrive = fc
    .record({
      expected: fc.dictionary(
        fc.constantFrom(...CLASSES),
        fc.double({ min: 0, max: 4000, noNaN: true }),
      ),
      took: fc.double({ min: -100, max: 20_000, noNaN: true }),
      hasStart: fc.boolean(),
      isPaused: fc.boolean(),
    })
    .map(({ expected, took, ...told }) => aDrive(expected, took, told));

  it('never leaves its bounds, whatever was driven', () => {
    fc.assert(
      fc.property(fc.array(anyDrive, { maxLength: 60 }), (drives) => {
        for (const { factor, drives: counted } of Object.values(learnedSpeeds(drives))) {
          expect(factor).toBeGreaterThanOrEqual(LEAST_CORRECTION);
          expect(factor).toBeLessThanOrEqual(MOST_CORRECTION);
          expect(counted).toBeGreaterThanOrEqual(0);
        }
      }),
    );
  });

  it('does not care in which order the drives come', () => {
    fc.assert(
      fc.property(
        fc
          .array(anyDrive, { maxLength: 40 })
          .chain((drives) =>
            fc.tuple(
              fc.constant(drives),
              fc.shuffledSubarray(drives, { minLength: drives.length, maxLength: drives.length }),
            ),
          ),
        ([drives, shuffled]) => expect(learnedSpeeds(shuffled)).toEqual(learnedSpeeds(drives)),
      ),
    );
  });

  it('learns nothing from drives that tell nothing', () => {
    const slow = Array.from({ length: 50 }, () => aDrive({ local: 600 }, 1200, { isPaused: true }));
    expect(learnedSpeeds(slow)).toEqual({});
    const fair = Array.from({ length: 20 }, () => aDrive({ local: 600 }, 600));
    expect(learnedSpeeds([...slow, ...fair])).toEqual({ local: { drives: 20, factor: 1 } });
  });
});

describe('driveFault', () => {
  it.each([
    [aDrive({ local: 600 }, 700), null],
    [aDrive({ local: 600 }, 700, { hasStart: false }), /no position/],
    [aDrive({ local: 600 }, 700, { isPaused: true }), /paused/],
    [aDrive({ local: 600 }, 119), /2 minutes/],
    [aDrive({ local: 600 }, -700), /2 minutes/],
    [aDrive({ local: 9000 }, (3 * HOUR_MS + MINUTE_MS) / 1000), /3 hours/],
    [aDrive({ local: 30 }, 200), /too short/],
    [aDrive({ local: 600 }, 2401), /not the way/],
    [aDrive({ local: 600 }, 149), /not the way/],
  ])('of %j is %s', (drive, words) => {
    const fault = driveFault(drive);
    if (words === null) expect(fault).toBeNull();
    else expect(fault).toMatch(words);
  });
});
