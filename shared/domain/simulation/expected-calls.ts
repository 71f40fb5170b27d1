import type { DispatchState } from './dispatch-state';
import { Dice } from './dice';
import type { StormCall } from './storm';

/** How far back and how far ahead, in seconds, and the part of the calls then that is expected again. */
const WINDOW = 3600;
const AGAIN = 0.3;

/**
 * Calls that are likely to come within the hour: those of the last hour once more, some of them, at the
 * same doors and as urgent. A storm's calls come in bursts where the power has just come back, so what came in
 * lately is the best guess at what comes next that needs no knowledge of the grid.
 */
export function expectedCalls({ now, seen }: DispatchState, seed: number): StormCall[] {
  const dice = new Dice(seed + Math.round(now));
  return seen
    .filter(({ calledAt }) => calledAt > now - WINDOW)
    .filter(() => dice.chance(AGAIN))
    .map((call) => ({
      ...call,
      id: `expected-${call.id}`,
      window: null,
      calledAt: call.calledAt + WINDOW,
      readyAt: Math.max(now, call.readyAt + WINDOW),
      stakes: call.stakes.map((stake) => ({ ...stake, at: stake.at + WINDOW })),
    }));
}
