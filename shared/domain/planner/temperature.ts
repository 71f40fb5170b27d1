import type { CompiledProblem } from './compiled-problem';
import { NO_WAY_SECONDS } from './problem';

/** Rounds that take nothing worse, to see what the steps of this problem are like. */
const FIRST_ROUNDS = 100;
/** First temperature at the least, and the last, as parts of the price of a drive. */
const HOT_DRIVE = 1;
const COLD_DRIVE = 0.02;
/** First temperature as a part of the usual loss of a round, for one round a job; grows with the root. */
const HOT_LOSS = 0.02;

/**
 * How much worse a plan may be and still be kept, in money. The shape (exponential) is that of the
 * published method. Where it begins depends on what the rounds of this problem usually lose, which is
 * little where only drives differ and much where a freezer does; and on how many rounds there will be.
 */
export class Cooling {
  private readonly drive: number;
  private readonly jobs: number;
  private losses: number[] = [];
  private hot = 0;
  private cold = 0;
  private firstShare = 0;

  constructor(c: CompiledProblem) {
    this.drive = meanDrivePrice(c);
    this.jobs = Math.max(1, c.jobCount);
  }

  /** Told what a round would have lost. */
  note(worse: number): void {
    if (this.hot === 0 && worse > 1e-9) this.losses.push(worse);
  }

  /**
   * @param share of the search that is done, 0 to 1
   * @param rounds that are done
   */
  at(share: number, rounds: number): number {
    if (this.hot === 0) {
      if (rounds < FIRST_ROUNDS) return 0;
      this.begin(share, rounds);
    }
    const left = Math.min(1, (share - this.firstShare) / (1 - this.firstShare));
    return this.hot * (this.cold / this.hot) ** left;
  }

  private begin(share: number, rounds: number): void {
    const perJob = rounds / Math.max(share, 1e-9) / this.jobs;
    const losses = this.losses.sort((a, b) => a - b);
    const usual = losses[Math.floor(losses.length / 2)] ?? 0;
    this.losses = [];
    this.hot = Math.max(
      this.drive * HOT_DRIVE,
      Math.min(usual, usual * HOT_LOSS * Math.sqrt(perJob)),
    );
    this.cold = this.drive * COLD_DRIVE;
    this.firstShare = Math.min(share, 0.999);
  }
}

function meanDrivePrice(c: CompiledProblem): number {
  let seconds = 0;
  let count = 0;
  for (let from = 0; from < c.locations; from++) {
    for (let to = from + 1; to < c.locations; to += 1 + Math.floor(c.locations / 50)) {
      const drive = c.travel[from * c.locations + to]!;
      if (drive >= NO_WAY_SECONDS) continue;
      seconds += drive;
      count++;
    }
  }
  return Math.max(1, count > 0 ? (seconds / count) * c.travelPrice : 1);
}
