import { checkPlan } from '../planner/check-plan';
import { plan } from '../planner/plan';
import { DEFAULT_PRICES, weightsOf } from '../planner/plan-prices';
import type { Posing } from '../planner/pose';
import type { PlanProblem } from '../planner/problem';
import { DEFAULT_WEIGHTS } from '../urgency';
import { jobOf } from './rolling-policy';
import type { StormOutcome } from './run-storm';
import { MOST_OVERTIME, NEVER, type Storm } from './storm';

/**
 * One long search that knows every call, every drive and every visit's length beforehand: what the
 * rolling plans are measured by. It is a search and no bound: nothing says that it could not be passed.
 */
export function clairvoyantOutcome(
  storm: Storm,
  iterations: number,
): StormOutcome & { readonly invalidPlans: number } {
  const exact = [{ secondsBefore: 0, share: 1 }];
  const posing: Posing = { foodSpread: exact, medicineSpread: exact, windowMargin: 0 };
  const told = { now: 0, medicineWeight: DEFAULT_WEIGHTS.medicine, ...DEFAULT_PRICES, posing };
  const calls = storm.calls.filter(({ cancelledAt }) => cancelledAt === NEVER);
  const problem: PlanProblem = {
    version: 1,
    now: 0,
    locations: storm.places,
    matrix: storm.actualDrive,
    jobs: calls.map((call) => ({ ...jobOf(call, told), service: call.actualService })),
    technicians: storm.technicians.map((technician) => ({
      id: technician.id,
      home: technician.home,
      at: technician.home,
      availableAt: 0,
      skills: technician.skills,
      parts: technician.parts,
      shifts: technician.shifts,
      frozen: [],
    })),
    weights: { ...weightsOf(DEFAULT_PRICES), maxOvertime: MOST_OVERTIME },
  };
  const result = plan(problem, { iterations, seed: storm.seed });
  const starts = new Map(
    result.routes.flatMap(({ technician, stops }) =>
      stops.map(({ job, start }) => [job, { technician, start }] as const),
    ),
  );
  const check = checkPlan(problem, result);
  return {
    calls: storm.calls.map((call) => ({
      call,
      startedAt: starts.get(call.id)?.start ?? null,
      technician: starts.get(call.id)?.technician ?? null,
      isCalledOff: call.cancelledAt < NEVER,
    })),
    driveSeconds: (check.travel / 40) * 3600,
    overtimeSeconds: (check.overtime / 90) * 3600,
    decisions: 1,
    invalidPlans: check.violations.length > 0 ? 1 : 0,
  };
}
