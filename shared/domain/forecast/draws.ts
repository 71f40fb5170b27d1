import { SeededRandom } from '../planner/random';

/** Draws from the distributions that a forecast needs; the same for the same seed. */
export class Draws {
  private readonly random: SeededRandom;
  private spare: number | null = null;

  constructor(seed: number) {
    this.random = new SeededRandom(seed);
  }

  /** 0 up to but not including 1. */
  unit(): number {
    return this.random.unit();
  }

  /** Mean 0, variance 1: the polar method (Marsaglia and Bray, SIAM Review 6(3), 1964; from memory). */
  normal(): number {
    if (this.spare !== null) {
      const kept = this.spare;
      this.spare = null;
      return kept;
    }
    for (;;) {
      const x = 2 * this.unit() - 1;
      const y = 2 * this.unit() - 1;
      const square = x * x + y * y;
      if (square === 0 || square >= 1) continue;
      const scale = Math.sqrt((-2 * Math.log(square)) / square);
      this.spare = y * scale;
      return x * scale;
    }
  }

  exponential(mean: number): number {
    return -mean * Math.log(1 - this.unit());
  }

  /**
   * Mean `shape / rate`. Marsaglia and Tsang, "A simple method for generating gamma variables", ACM
   * Transactions on Mathematical Software 26(3), 2000 (from memory).
   */
  gamma(shape: number, rate = 1): number {
    if (shape < 1) {
      const boost = Math.pow(1 - this.unit(), 1 / shape);
      return this.gamma(shape + 1, rate) * boost;
    }
    const d = shape - 1 / 3;
    const c = 1 / Math.sqrt(9 * d);
    for (;;) {
      const x = this.normal();
      const v = Math.pow(1 + c * x, 3);
      if (v <= 0) continue;
      const u = 1 - this.unit();
      if (Math.log(u) < (x * x) / 2 + d - d * v + d * Math.log(v)) return (d * v) / rate;
    }
  }

  beta(a: number, b: number): number {
    const x = this.gamma(a);
    const y = this.gamma(b);
    return x + y > 0 ? x / (x + y) : a / (a + b);
  }

  /** A count with this mean: multiplication for small means, halved by a gamma draw for large ones. */
  poisson(mean: number): number {
    let left = mean;
    let count = 0;
    // Of a Poisson stream, the time of the m-th event is gamma (Ahrens and Dieter, 1974; from memory).
    while (left > 30) {
      const m = Math.floor(left * 0.875);
      const at = this.gamma(m);
      if (at > left) return count + this.binomial(m - 1, left / at);
      count += m;
      left -= at;
    }
    const limit = Math.exp(-left);
    let product = 1 - this.unit();
    while (product > limit) {
      count++;
      product *= 1 - this.unit();
    }
    return count;
  }

  private binomial(trials: number, chance: number): number {
    let hits = 0;
    for (let i = 0; i < trials; i++) if (this.unit() < chance) hits++;
    return hits;
  }
}
