import { compile, type CompiledProblem } from './compiled-problem';
import { NO_WAY_SECONDS, type Plan, type PlanProblem, type PlanRoute } from './problem';
import { SeededRandom } from './random';
import type { Route } from './route';
import { Search } from './search';
import { unassignedReason } from './unassigned-reason';

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

/** How often the caller is asked; a round takes well under a millisecond. */
const ASK_EVERY = 32;

/**
 * Plans the routes of all technicians.
 *
 * Starts from the previous plan as far as it still holds, fills in what is new, then searches. The
 * result never costs more than the previous plan priced afresh, and the same problem, seed and number
 * of iterations always give the same plan.
 */
export function plan(problem: PlanProblem, options: PlanOptions): Plan {
  const compiled = compile(problem);
  const random = new SeededRandom(options.seed);
  const search = new Search(compiled, random);
  takeOverPrevious(search, compiled);
  search.fillFromBank();

  const [hot, cold] = temperatures(compiled);
  let done = 0;
  let share = 0;
  while (done < options.iterations) {
    if (done % ASK_EVERY === 0) {
      if (options.shouldStop?.()) break;
      share = Math.max(done / options.iterations, options.progress?.() ?? 0);
      if (share >= 1) break;
    }
    search.step(hot * (cold / hot) ** share);
    done++;
  }
  search.restoreBest();
  return report(search, compiled, done);
}

/** The previous plan as it would go from now on: what no longer fits is left out, nothing is added. */
export function carriedOver(problem: PlanProblem): Plan {
  const compiled = compile(problem);
  const search = new Search(compiled, new SeededRandom(0));
  takeOverPrevious(search, compiled);
  const carried = report(search, compiled, 0);
  // Nobody has looked for a place for these, so nothing is known about the time.
  const unassigned = carried.unassigned.map((left) =>
    left.reason === 'capacity' ? { ...left, because: 'Not on the plan in force.' } : left,
  );
  return { ...carried, unassigned };
}

function takeOverPrevious(search: Search, { problem, shifts }: CompiledProblem): void {
  const jobNumber = new Map(problem.jobs.map((job, index) => [job.id, index]));
  const stopsOf = new Map(
    (problem.previous?.routes ?? []).map((route) => [
      `${route.shift} ${route.technician}`,
      route.stops.flatMap((stop) => jobNumber.get(stop.job) ?? []),
    ]),
  );
  shifts.forEach((shift, index) => {
    const { id } = problem.technicians[shift.technician]!;
    const stops = stopsOf.get(`${shift.shift} ${id}`);
    if (stops) search.takeOver(index, stops);
  });
}

/**
 * The first and last temperature, in money: from about the price of one drive down to a small part
 * of it. The shape (exponential) is that of the published method; the figures were tried out on the
 * exact small problems and on made-up storms.
 */
function temperatures(c: CompiledProblem): readonly [hot: number, cold: number] {
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
  const meanDrive = Math.max(1, count > 0 ? (seconds / count) * c.travelPrice : 1);
  return [meanDrive * HOT, meanDrive * COLD];
}
const HOT = 3;
const COLD = 0.1;

function report(search: Search, c: CompiledProblem, iterations: number): Plan {
  const { jobs, technicians } = c.problem;
  const routes = search.routes.filter((route) => route.count > 0);
  const planned = new Set(
    routes.flatMap((route) => Array.from(route.stops.subarray(0, route.count))),
  );
  return {
    routes: routes.map((route): PlanRoute => ({
      technician: technicians[route.from.technician]!.id,
      shift: route.from.shift,
      stops: stopsOf(route, c),
      end: route.arrive[route.count]!,
    })),
    unassigned: jobs.flatMap((job, index) =>
      planned.has(index) ? [] : [{ job: job.id, ...unassignedReason(index, search, c) }],
    ),
    cost: search.price,
    iterations,
  };
}

function stopsOf(route: Route, c: CompiledProblem): PlanRoute['stops'] {
  return Array.from(route.stops.subarray(0, route.count), (job, index) => ({
    job: c.problem.jobs[job]!.id,
    arrive: route.arrive[index]!,
    start: route.start[index]!,
    finish: route.start[index]! + c.service[job]!,
  }));
}
