import type { Plan, PlanHalt, PlanRoute } from './problem';
import { departure, type Departure } from './departure';
import { ARRIVE, DIRECT, PEND, READY, START } from './gap-fields';
import type { Route } from './route';
import { UnassignedReasons } from './unassigned-reason';
import type { WorkingPlan } from './working-plan';

/** The plan under work in the words of the problem. */
export function report(plan: WorkingPlan, iterations: number): Plan {
  const { jobs, technicians } = plan.c.problem;
  const reasons = new UnassignedReasons(plan);
  return {
    routes: plan.routes
      .filter((route) => route.count > 0)
      .map((route): PlanRoute => {
        const halts = haltsOf(route, plan);
        return {
          technician: technicians[route.from.technician]!.id,
          shift: route.from.shift,
          stops: stopsOf(route, plan),
          ...(halts.length > 0 ? { halts } : {}),
          end: route.end,
        };
      }),
    unassigned: jobs.flatMap((job, index) =>
      plan.bankIndex[index]! < 0 ? [] : [{ job: job.id, ...reasons.of(index) }],
    ),
    cost: plan.price,
    iterations,
  };
}

function stopsOf(route: Route, { c }: WorkingPlan): PlanRoute['stops'] {
  const stops = Array.from(route.stops.subarray(0, route.count), (job, index) => ({
    job: c.problem.jobs[job]?.id ?? '',
    arrive: route.at(index, ARRIVE),
    start: route.at(index, START),
    finish: route.at(index, START) + c.service[route.row + job]!,
  }));
  if (route.shopAt >= 0) stops.splice(route.shopAt, 1);
  return stops;
}

function haltsOf(route: Route, { c, parts }: WorkingPlan): PlanHalt[] {
  const halts: PlanHalt[] = [];
  const { breaks } = route.from;
  const leave: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };
  for (let i = 0; i < route.count; i++) {
    const before = route.shopAt >= 0 && i > route.shopAt ? i - 1 : i;
    const job = route.stops[i]!;
    const [drive, work] = [route.at(i, DIRECT), c.service[route.row + job]!];
    let time = route.at(i, READY);
    for (let next = route.at(i, PEND); next < route.at(i + 1, PEND); next++) {
      const due = breaks[next]!;
      departure(c, [due], 0, time, job, drive, work, leave);
      if (leave.at === time) continue;
      halts.push({ kind: 'break', before, start: Math.max(time, due.from), finish: leave.at });
      time = leave.at;
    }
    if (i !== route.shopAt) continue;
    const fetched = parts.fetchedBy(route);
    halts.push({
      kind: 'shop',
      before,
      start: route.at(i, ARRIVE),
      finish: route.at(i, ARRIVE) + work,
      parts: Object.fromEntries(
        c.partNames.flatMap((name, part) =>
          fetched && fetched[part]! > 0 ? [[name, fetched[part]!] as const] : [],
        ),
      ),
    });
  }
  return halts;
}
