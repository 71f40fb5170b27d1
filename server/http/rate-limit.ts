import type { RouteName } from '@shared/contract/paths';
import { TooManyAttempts } from '../staff/sign-in-limit';

const WINDOW_MS = 60_000;

/**
 * How often one person may ask in a minute, where an answer costs much: cores, money for texts, or a
 * guess at a password. What nobody needs so often by hand; our estimate.
 */
export const MOST_PER_MINUTE: Readonly<Partial<Record<RouteName, number>>> = {
  changePassword: 10,
  boardPicture: 120,
  pockets: 120,
  drain: 120,
  forecast: 120,
  whatIf: 60,
  partsAhead: 120,
  suggestAddresses: 600,
  nearestAddress: 300,
  proposePlan: 20,
  sendMessage: 60,
  uploadNightLog: 30,
  previewNightLog: 60,
  importNightLog: 30,
  uploadRegionFile: 30,
  importRegion: 30,
  useRegion: 30,
  addUser: 60,
  resetPassword: 60,
};

/**
 * Counts what each person asks of the routes that cost much: a plan, a file, a text. In memory and
 * for this process alone, since it guards this process's own cores; sign-in is counted in the database.
 */
export class RateLimit {
  private readonly asked = new Map<string, number>();
  private since: number;

  /** @param now a clock that never goes back, in milliseconds */
  constructor(private readonly now: () => number = () => performance.now()) {
    this.since = now();
  }

  /** @throws TooManyAttempts with the time until the count begins anew */
  count(whoAndWhat: string, mostPerMinute: number): void {
    const now = this.now();
    if (now - this.since >= WINDOW_MS) {
      this.asked.clear();
      this.since = now;
    }
    const asked = (this.asked.get(whoAndWhat) ?? 0) + 1;
    this.asked.set(whoAndWhat, asked);
    if (asked > mostPerMinute)
      throw new TooManyAttempts(Math.ceil((this.since + WINDOW_MS - now) / 1000));
  }
}
