// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { imul, floor } = Math;

/**
 * Seeded chance for the invented county. Every stage draws from its own named stream, so that a
 * change in one stage does not reshuffle the others. Only additions, multiplications and square
 * roots are used downstream of these numbers: they give the same bits on every machine, which
 * sines and exponentials do not promise.
 */
export interface Chance {
  /** A number in [0, 1). */
  next(): number;
  /** A number in [from, to). */
  between(from: number, to: number): number;
  /** A whole number in [0, below). */
  below(below: number): number;
  /** Whether something of this probability happens. */
  happens(probability: number): boolean;
  pick<T>(from: readonly T[]): T;
}

/** Spreads the bits of three whole numbers over 32 bits. */
export function mix(a: number, b: number, seed: number): number {
  let h = imul(a | 0, 0x9e3779b1) ^ imul(b | 0, 0x85ebca6b) ^ imul(seed, 0xc2b2ae35);
  h = imul(h ^ (h >>> 15), 0x2c1b3c6d);
  h = imul(h ^ (h >>> 12), 0x297a2d39);
  return (h ^ (h >>> 15)) >>> 0;
}

/** The seed of a named stage. */
export function seedOf(seed: number, stage: string, number = 0): number {
  let h = 0x811c9dc5;
  for (let i = 0; i < stage.length; i++) h = imul(h ^ stage.charCodeAt(i), 0x01000193);
  return mix(h, number, seed);
}

export function chanceOf(seed: number, stage: string, number = 0): Chance {
  let state = seedOf(seed, stage, number);
  const next = (): number => {
    state = (state + 0x6d2b79f5) | 0;
    let t = imul(state ^ (state >>> 15), 1 | state);
    t = (t + imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
  return {
    next,
    between: (from, to) => from + next() * (to - from),
    below: (below) => floor(next() * below),
    happens: (probability) => next() < probability,
    pick: <T>(from: readonly T[]): T => {
      const item = from[floor(next() * from.length)];
      if (item === undefined) throw new Error('Nothing to pick from.');
      return item;
    },
  };
}

/** Fisher and Yates's shuffle, on a copy. */
export function shuffled<T>(items: readonly T[], chance: Chance): T[] {
  const result = [...items];
  for (let i = result.length - 1; i > 0; i--) {
    const j = chance.below(i + 1);
    [result[i], result[j]] = [result[j]!, result[i]!];
  }
  return result;
}

const smooth = (t: number): number => t * t * (3 - 2 * t);
const signed = (hash: number): number => hash / 2147483648 - 1;

/** Value noise in [-1, 1] over a plane whose unit is the noise's wavelength. */
export function noise2(x: number, y: number, seed: number): number {
  const i = floor(x);
  const j = floor(y);
  const u = smooth(x - i);
  const v = smooth(y - j);
  const low = signed(mix(i, j, seed)) * (1 - u) + signed(mix(i + 1, j, seed)) * u;
  const high = signed(mix(i, j + 1, seed)) * (1 - u) + signed(mix(i + 1, j + 1, seed)) * u;
  return low * (1 - v) + high * v;
}

/** Value noise in [-1, 1] along a line whose unit is the noise's wavelength. */
export const noise1 = (x: number, seed: number): number => {
  const i = floor(x);
  const u = smooth(x - i);
  return signed(mix(i, 7, seed)) * (1 - u) + signed(mix(i + 1, 7, seed)) * u;
};
