import { checkPlan } from '../planner/check-plan';
import { plan } from '../planner/plan';
import {
  DEFAULT_LEAST_GAIN,
  DEFAULT_PRICES,
  weightsOf,
  type PlanPrices,
} from '../planner/plan-prices';
import {
  isWorthChanging,
  posedCall,
  POSING,
  type Posing,
  type PosingSetting,
} from '../planner/pose';
import type { Plan, PlanJob, PlanProblem, PlanRoute, PlanTechnician } from '../planner/problem';
import {
  driveBetween,
  type Assignment,
  type Decision,
  type DispatchState,
  type Policy,
} from './dispatch-state';
import { DEFAULT_WEIGHTS } from '../urgency';
import { expectedCalls } from './expected-calls';
import { MOST_OVERTIME, type StormCall } from './storm';

export interface RollingOptions {
  /** Rounds of search for each plan. */
  readonly iterations: number;
  /** Other margins, prices and limits than the product's own, to try them. */
  readonly posing?: Posing;
  readonly prices?: Partial<PlanPrices>;
  readonly medicineWeight?: number;
  readonly leastGain?: number;
  /** Plans also for calls that are likely to come: see expected-calls.ts. */
  readonly looksAhead?: boolean;
}

/** What the rolling plans did, beside what came of them. */
export interface RollingFigures {
  plans: number;
  /** Plans in which the checker found something. */
  invalidPlans: number;
  /** Stops that were to begin within two hours, and those of them that the next plan moved. */
  soonStops: number;
  changedStops: number;
}

const SOON_SECONDS = 2 * 3600;
const MOVED_SECONDS = 1800;
/** Setting off for a window so early as to wait there at most so long. */
const EARLY_SECONDS = 10 * 60;

/** The planner, asked anew whenever somebody is free; the plan in force is where it starts from. */
export class RollingPolicy implements Policy {
  readonly figures: RollingFigures = { plans: 0, invalidPlans: 0, soonStops: 0, changedStops: 0 };
  private inForce: readonly PlanRoute[] = [];

  constructor(
    private readonly seed: number,
    private readonly options: RollingOptions,
  ) {}

  decide(state: DispatchState): Decision {
    const problem = this.pose(state);
    const { iterations, leastGain = DEFAULT_LEAST_GAIN } = this.options;
    const repaired = this.checked(problem, plan(problem, { iterations: 0, seed: this.seed }));
    const improved = this.checked(
      problem,
      plan(problem, { iterations, seed: this.seed + this.figures.plans }),
    );
    const gain = repaired.cost - improved.cost;
    const chosen = isWorthChanging(gain, leastGain) ? improved : repaired;
    this.countChanges(state, chosen);
    this.inForce = chosen.routes.map((route) => ({
      ...route,
      // Shifts that are over are no part of the problem; here they count on.
      shift: route.shift + firstShift(state, route.technician),
    }));
    return this.firstStops(state);
  }

  private pose(state: DispatchState): PlanProblem {
    const { storm, now } = state;
    const { posing = POSING, medicineWeight = DEFAULT_WEIGHTS.medicine } = this.options;
    const prices = { ...DEFAULT_PRICES, ...this.options.prices };
    const told = { now, posing, medicineWeight, ...prices };
    const jobs = state.open.map((call) => jobOf(call, told));
    return {
      version: 1,
      now,
      locations: storm.places,
      matrix: storm.expectedDrive,
      jobs: this.options.looksAhead
        ? [...jobs, ...expectedCalls(state, this.seed).map((call) => jobOf(call, told))]
        : jobs,
      technicians: state.crew.map((member): PlanTechnician => {
        const { technician, shift } = member;
        const first = firstShift(state, technician.id);
        return {
          id: technician.id,
          home: technician.home,
          at: member.place,
          availableAt: member.freeAt,
          skills: technician.skills,
          parts: member.partsLeft,
          shifts: technician.shifts
            .slice(first)
            .map(({ start, end }, index) =>
              index + first > shift ? { start, end, from: technician.home } : { start, end },
            ),
          frozen: [],
        };
      }),
      previous: {
        routes: this.inForce.flatMap((route) => {
          const shift = route.shift - firstShift(state, route.technician);
          return shift < 0 ? [] : [{ ...route, shift }];
        }),
      },
      weights: { ...weightsOf(prices), maxOvertime: MOST_OVERTIME },
    };
  }

  private checked(problem: PlanProblem, result: Plan): Plan {
    this.figures.plans++;
    if (checkPlan(problem, result).violations.length > 0) this.figures.invalidPlans++;
    return result;
  }

  /** Of the stops that people were told to expect soon and that nobody has set off to: how many moved. */
  private countChanges({ now, open }: DispatchState, chosen: Plan): void {
    const isOpen = new Set(open.map(({ id }) => id));
    const found = new Map(
      chosen.routes.flatMap(({ technician, stops }) =>
        stops.map(({ job, start }) => [job, { technician, start }] as const),
      ),
    );
    for (const { technician, stops } of this.inForce) {
      for (const { job, start } of stops) {
        if (!isOpen.has(job) || start > now + SOON_SECONDS) continue;
        this.figures.soonStops++;
        const next = found.get(job);
        if (next?.technician !== technician || Math.abs(next.start - start) > MOVED_SECONDS) {
          this.figures.changedStops++;
        }
      }
    }
  }

  private firstStops(state: DispatchState): Decision {
    const { now, storm } = state;
    const assignments: Assignment[] = [];
    const wakes: number[] = [];
    const open = new Set(state.open.map(({ id }) => id));
    for (const member of state.crew.filter(({ isFree }) => isFree)) {
      const { id } = member.technician;
      const route = this.inForce.find(
        ({ technician, shift }) => technician === id && shift === member.shift,
      );
      const stop = route?.stops[0];
      if (!stop) continue;
      const call = state.open.find((one) => one.id === stop.job);
      const place = call?.place ?? member.place;
      const leaveAt = stop.start - EARLY_SECONDS - driveBetween(storm, member.place, place);
      if (open.has(stop.job) && leaveAt <= now)
        assignments.push({ technician: id, call: stop.job });
      else wakes.push(Math.max(now + 300, leaveAt));
    }
    return wakes.length > 0 ? { assignments, wakeAt: Math.min(...wakes) } : { assignments };
  }
}

/** The first shift of a technician that is not over, so the first that is in the problem. */
function firstShift({ crew, now }: DispatchState, id: string): number {
  const { technician, shift } = crew.find((member) => member.technician.id === id)!;
  const over = technician.shifts.findIndex(({ end }) => end + MOST_OVERTIME > now);
  return over < 0 ? technician.shifts.length : Math.max(over, shift);
}

/** A call as a planning job. */
export function jobOf(call: StormCall, told: PosingSetting): PlanJob {
  return {
    id: call.id,
    loc: call.place,
    service: Math.round(call.expectedService),
    calledAt: call.calledAt,
    earliest: call.readyAt,
    skills: call.skills,
    ...(call.part === null ? {} : { part: call.part }),
    ...posedCall(
      {
        stakes: call.stakes
          .filter(({ at }) => at >= told.now)
          .map(({ kind, at, value }) => ({
            value: kind === 'medicine' ? value * told.medicineWeight : value,
            isMedicine: kind === 'medicine',
            moments: [{ at, share: 1 }],
          })),
        window: call.window,
      },
      told,
    ),
  };
}
