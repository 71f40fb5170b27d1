import type { CompiledProblem } from './compiled-problem';
import { NO_WAY_SECONDS } from './problem';

const HOT = 3;
const COLD = 0.1;

/**
 * How much worse a plan may be and still be kept, in money: from about the price of one drive down to a
 * small part of it. The shape (exponential) is that of the published method.
 */
export class Cooling {
  private readonly hot: number;
  private readonly cold: number;

  constructor(c: CompiledProblem) {
    const drive = meanDrivePrice(c);
    this.hot = drive * HOT;
    this.cold = drive * COLD;
  }

  /** @param share of the search that is done, 0 to 1 */
  at(share: number): number {
    return this.hot * (this.cold / this.hot) ** share;
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
