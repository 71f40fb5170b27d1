import { SeededRandom } from '../planner/random';

/** Random draws of the kinds that a made-up storm needs; the same seed gives the same draws. */
export class Dice {
  private readonly random: SeededRandom;

  constructor(seed: number) {
    this.random = new SeededRandom(seed);
  }

  /** From 0 up to but not including 1. */
  unit(): number {
    return this.random.unit();
  }

  between(low: number, high: number): number {
    return low + this.unit() * (high - low);
  }

  /** A whole number from 0 to `below` - 1. */
  below(below: number): number {
    return this.random.below(below);
  }

  chance(share: number): boolean {
    return this.unit() < share;
  }

  pick<Item>(items: readonly Item[]): Item {
    return items[this.below(items.length)]!;
  }

  exponential(mean: number): number {
    return -mean * Math.log(1 - this.unit());
  }

  /** Mean 0, variance 1: after Box & Muller, "A Note on the Generation of Random Normal Deviates", 1958. */
  normal(): number {
    return Math.sqrt(-2 * Math.log(1 - this.unit())) * Math.cos(2 * Math.PI * this.unit());
  }

  /** A factor around 1 whose mean is 1. */
  noise(spread: number): number {
    return Math.exp(spread * this.normal() - spread ** 2 / 2);
  }
}
