// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { floor } = Math;

/** A stream of numbers that is the same for the same seed: xorshift32 (Marsaglia 2003). */
export class SeededRandom {
  private state: number;

  constructor(seed: number) {
    // Neighbouring seeds must not give neighbouring streams; zero would stay zero for ever.
    let mixed = Math.imul(seed ^ 0x9e3779b9, 0x85ebca6b);
    mixed = Math.imul(mixed ^ (mixed >>> 13), 0xc2b2ae35);
    this.state = (mixed ^ (mixed >>> 16)) >>> 0 || 0x6d2b79f5;
  }

  /** A whole number from 0 to 2^32 - 1. */
  uint32(): number {
    let x = this.state;
    x ^= x << 13;
    x ^= x >>> 17;
    x ^= x << 5;
    this.state = x >>> 0;
    return this.state;
  }

  /** A number from 0 up to but not including 1. */
  unit(): number {
    return this.uint32() / 4294967296;
  }

  /** A whole number from 0 to `below` - 1. */
  below(below: number): number {
    return floor(this.unit() * below);
  }
}
