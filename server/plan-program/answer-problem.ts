import { plan } from '@shared/domain/planner/plan';
import type { Plan, UnassignedReason } from '@shared/domain/planner/problem';
import { UnreadableField } from '@shared/domain/planner/read-fields';
import { readProblem } from '@shared/domain/planner/read-problem';
import { explainPlan, type PlanReasons } from './explain-plan';
import { parseProblem } from './parse-problem';

/** What the command line asks; it goes before what the problem asks. */
export interface Asked {
  readonly seconds?: number;
  readonly seed?: number;
  /** Rounds of search instead of a time: the plan is then the same each time. */
  readonly iterations?: number;
  readonly explain: boolean;
}

/** A problem that cannot be planned, in one line for whoever sent it. */
export class BadProblem extends Error {}

const DEFAULT_BUDGET_MS = 1000;
/** Rounds that no budget of time reaches. */
const WITHOUT_END = 1e9;

/**
 * Plans one problem and writes the plan as one line of JSON.
 *
 * @param began when the text was complete, on the clock of `performance.now()`: reading and checking
 *   it count as part of the budget
 * @throws BadProblem
 */
export function answerProblem(text: string, asked: Asked, began: number): string {
  const { problem, budgetMs, seed } = read(text);
  const milliseconds = asked.seconds === undefined ? budgetMs : asked.seconds * 1000;
  const budget = milliseconds ?? DEFAULT_BUDGET_MS;
  const spent = (): number => performance.now() - began;
  const byTime = {
    iterations: budget > 0 ? WITHOUT_END : 0,
    shouldStop: () => spent() >= budget,
    progress: () => spent() / budget,
  };
  const result = plan(problem, {
    seed: asked.seed ?? seed ?? 1,
    ...(asked.iterations === undefined ? byTime : { iterations: asked.iterations }),
  });
  const reasons = asked.explain ? explainPlan(problem, result) : null;
  return JSON.stringify(written(result, reasons, spent()));
}

function read(text: string): ReturnType<typeof readProblem> {
  try {
    return readProblem(parsed(text));
  } catch (error) {
    if (error instanceof UnreadableField) throw new BadProblem(oneLine(error.message));
    throw error;
  }
}

function parsed(text: string): unknown {
  try {
    return parseProblem(text);
  } catch (error) {
    throw new BadProblem(`not JSON: ${oneLine((error as Error).message)}`);
  }
}

function written(result: Plan, reasons: PlanReasons | null, elapsedMs: number): object {
  return {
    routes: result.routes.map(({ technician, shift, stops, halts, end }) => ({
      technician,
      shift,
      stops: reasons
        ? stops.map((stop) => ({ ...stop, because: reasons.stops.get(stop.job) }))
        : stops,
      ...(halts && halts.length > 0 ? { halts } : {}),
      end,
    })),
    unassigned: result.unassigned.map(({ job, reason, because }) => ({
      job,
      reason: WRITTEN_REASON[reason],
      ...(reasons ? { because, wouldChange: reasons.wouldChange.get(job) ?? [] } : {}),
    })),
    cost: result.cost,
    iters: result.iterations,
    elapsedMs: Math.round(elapsedMs * 10) / 10,
  };
}

/** The format knows four reasons; a call that no road leads to is one that time does not reach. */
const WRITTEN_REASON: Readonly<Record<UnassignedReason, string>> = {
  skill: 'skill',
  part: 'part',
  no_shift: 'no_shift',
  capacity: 'capacity',
  unreachable: 'capacity',
};

const oneLine = (words: string): string => words.replace(/\s+/g, ' ').slice(0, 300);
