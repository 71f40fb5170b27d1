import { compile } from './compiled-problem';
import { Insertion } from './insertion';
import { fillFromBank, makeRoomForLosers, takeOverPrevious } from './opening';
import type { Plan, PlanProblem } from './problem';
import { SeededRandom } from './random';
import { RecreateOrders } from './recreate-orders';
import { report } from './report';
import { Search } from './search';
import { solveSmall } from './solve-small';
import { Cooling } from './temperature';
import { WorkingPlan } from './working-plan';

export interface PlanOptions {
  /** Rounds of search; 0 gives the repaired plan at once. */
  readonly iterations: number;
  readonly seed: number;
  /** Asked now and then; the best plan so far is returned when it says yes. */
  readonly shouldStop?: () => boolean;
  /**
   * Share of the time that is used up, 0 to 1, for a caller who plans by the clock: the search grows
   * strict towards its end and has to know where that is.
   */
  readonly progress?: () => number;
}

/** How often the caller is asked whether to stop: a round with a thousand jobs may take half a millisecond. */
const ASK_EVERY = 8;
/** How often the share of the time is worked out anew. */
const SHARE_EVERY = 32;

/**
 * Plans the routes of all technicians.
 *
 * Starts from the previous plan as far as it still holds, fills in what is new, then searches. The
 * result never costs more than the previous plan priced afresh, and the same problem, seed and number
 * of iterations always give the same plan.
 */
export function plan(problem: PlanProblem, options: PlanOptions): Plan {
  const c = compile(problem);
  const random = new SeededRandom(options.seed);
  const working = new WorkingPlan(c);
  const insertion = new Insertion(working, random);
  takeOverPrevious(working);
  const orders = new RecreateOrders(c);
  const search = options.iterations > 0 ? new Search(working, random, insertion, orders) : null;
  fillFromBank(working, insertion, orders.byDensity, search?.near ?? null);

  let done = 0;
  if (search && !solveSmall(working)) {
    makeRoomForLosers(working, search.room, options.shouldStop);
    const cooling = new Cooling(c);
    let share = 0;
    while (done < options.iterations && search.hasChoice) {
      if (done % ASK_EVERY === 0 && options.shouldStop?.()) break;
      if (done % SHARE_EVERY === 0) {
        share = Math.max(done / options.iterations, options.progress?.() ?? 0);
        if (share >= 1) break;
      }
      cooling.note(search.step(cooling.at(share, done)));
      done++;
    }
    working.restoreBest();
  }
  return report(working, done);
}

/** The previous plan as it would go from now on: what no longer fits is left out, nothing is added. */
export function carriedOver(problem: PlanProblem): Plan {
  const working = new WorkingPlan(compile(problem));
  takeOverPrevious(working);
  const carried = report(working, 0);
  // Nobody has looked for a place for these, so nothing is known about the time.
  const unassigned = carried.unassigned.map((left) =>
    left.reason === 'capacity' ? { ...left, because: 'Not on the plan in force.' } : left,
  );
  return { ...carried, unassigned };
}
