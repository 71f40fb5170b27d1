import { randomUUID } from 'node:crypto';
import type { PlanDto } from '@shared/contract/routes';
import { isPlannable } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import { heldCount, missingSkills } from '@shared/domain/route-rules';
import type { CallRecord } from '../calls/call-record';
import type { Job } from '../commands/run-command';
import { select } from '../db/sql';
import { lockOpenStorm } from '../storms/storm-queries';
import type { StormRecord } from '../storms/storm-record';
import {
  callOf,
  endStop,
  lockRoutes,
  routeOf,
  stepCall,
  technicianOf,
  type ActiveStop,
  type Routes,
} from './lock-routes';
import { withdrawOffer } from './offer-next';
import { overtakePlans } from './overtake-plans';
import { writeChanges } from './route-changes';
import { toPlanDto } from './plan-rows';
import { settleRoutes } from './settle-routes';
import { PlanRecord, StopRecord } from './stop-record';

type PlannedStop = PlanDto['routes'][number]['stops'][number];

interface SeenPlan {
  readonly planId: string;
  readonly version: number;
}

/**
 * Puts a proposal into force, in one transaction, if the routes are still those it was made from.
 * What technicians and callers did since is respected: accepted and locked stops stay as they are,
 * calls that are settled or being checked are left out, and nobody gets back what they declined.
 *
 * @throws Refusal `not-found`, `storm-closed`, or `plan-overtaken` with the plan as it is now
 */
export async function publishPlan(job: Job, told: SeenPlan): Promise<PlanDto> {
  const { storm, plan } = await openPlan(job, told);
  const { routes: planned } = toPlanDto(plan);
  const callIds = planned.flatMap(({ stops }) => stops.map(({ callId }) => callId));
  const routes = await lockRoutes(job, storm.id, 'all', callIds);

  const loose = loosen(routes);
  const wanted = await stillWanted(job, routes, planned);
  await pullUnwanted(job, routes, loose, wanted);
  for (const [technicianId, stops] of wanted)
    for (const stop of stops) await putOnRoute(job, routes, loose, technicianId, stop);
  await settleRoutes(job, routes);

  plan.set({ state: 'published', version: (plan.version ?? 0) + 1 });
  await plan.save({ transaction: job.tx });
  job.touched.plans.add(plan.id);
  await overtakePlans(job, storm, plan);
  await writeChanges(job, { id: plan.id, stormId: storm.id, routes: planned });
  const count = [...wanted.values()].reduce((sum, stops) => sum + stops.length, 0);
  job.note('plan', plan.id, `published routes with ${String(count)} stops that may still move`);
  return toPlanDto(plan);
}

/** @throws Refusal `not-found`, `storm-closed`, or `plan-overtaken` with the plan as it is now */
export async function discardPlan(job: Job, told: SeenPlan): Promise<PlanDto> {
  const { plan } = await openPlan(job, told);
  plan.set({ state: 'discarded', version: (plan.version ?? 0) + 1 });
  await plan.save({ transaction: job.tx });
  job.touched.plans.add(plan.id);
  job.note('plan', plan.id, 'discarded the proposed routes');
  return toPlanDto(plan);
}

async function openPlan(
  job: Job,
  { planId, version }: SeenPlan,
): Promise<{ storm: StormRecord; plan: PlanRecord }> {
  const seen = await PlanRecord.findByPk(planId, { transaction: job.tx });
  if (!seen) throw new Refusal('not-found', 'There is no such plan.');
  const storm = await lockOpenStorm(seen.stormId, job.tx);
  job.inStorm(storm.id);
  const plan = await PlanRecord.findByPk(planId, { transaction: job.tx, lock: job.tx.LOCK.UPDATE });
  if (
    !plan ||
    plan.state !== 'proposed' ||
    plan.version !== version ||
    plan.baseEpoch !== storm.planEpoch
  )
    throw new Refusal(
      'plan-overtaken',
      'The routes have changed since this was proposed, or somebody decided about it before you.',
      plan && toPlanDto(plan),
    );
  return { storm, plan };
}

/** Takes every stop that may move off its route, by call. What is held stays at the routes' heads. */
function loosen(routes: Routes): Map<string, ActiveStop> {
  const loose = new Map<string, ActiveStop>();
  for (const technicianId of routes.stops.keys()) {
    const route = routeOf(routes, technicianId);
    for (const stop of route.splice(heldCount(route))) loose.set(stop.callId, stop);
  }
  return loose;
}

async function stillWanted(
  job: Job,
  routes: Routes,
  planned: PlanDto['routes'],
): Promise<Map<string, PlannedStop[]>> {
  const held = new Set([...routes.stops.values()].flat().map(({ callId }) => callId));
  const declined = await declines(job, routes.stormId);
  return new Map(
    planned.flatMap(({ technicianId, stops }): [string, PlannedStop[]][] => {
      const technician = routes.technicians.get(technicianId);
      if (!technician?.active) return [];
      const fit = (call: CallRecord): boolean =>
        isPlannable(call.state) &&
        !held.has(call.id) &&
        !declined.has(`${call.id} ${technicianId}`) &&
        missingSkills(call.skills, technician.skills).length === 0;
      return [[technicianId, stops.filter((stop) => fit(callOf(routes, stop)))]];
    }),
  );
}

async function declines(job: Job, stormId: string): Promise<ReadonlySet<string>> {
  const rows = await select<{ call_id: string; technician_id: string }>(
    job.sequelize,
    "SELECT call_id, technician_id FROM stops WHERE storm_id = ? AND state = 'declined'",
    [stormId],
    job.tx,
  );
  return new Set(rows.map((row) => `${row.call_id} ${row.technician_id}`));
}

async function pullUnwanted(
  job: Job,
  routes: Routes,
  loose: Map<string, ActiveStop>,
  wanted: ReadonlyMap<string, readonly PlannedStop[]>,
): Promise<void> {
  const kept = new Set([...wanted.values()].flat().map(({ callId }) => callId));
  for (const [callId, stop] of loose) {
    if (kept.has(callId)) continue;
    loose.delete(callId);
    endStop(job, routes, stop, 'pulled', 'Not on the new routes.');
    await stepCall(job, routes, callOf(routes, stop), 'waiting', 'not on the new routes');
  }
}

async function putOnRoute(
  job: Job,
  routes: Routes,
  loose: ReadonlyMap<string, ActiveStop>,
  technicianId: string,
  planned: PlannedStop,
): Promise<void> {
  const route = routeOf(routes, technicianId);
  const call = callOf(routes, planned);
  const technician = technicianOf(routes, technicianId);
  const stop = loose.get(call.id) ?? newStop(routes, technicianId, planned, route.length);
  if (stop.technicianId !== technicianId) {
    if (stop.state === 'offered')
      await withdrawOffer(job, routes, stop, `given to ${technician.name}`);
    job.touched.left.push({
      technicianId: stop.technicianId,
      stopId: stop.id,
      reason: `Call ${String(call.number)} was given to another technician.`,
    });
    stop.technicianId = technicianId;
  }
  if (stop.isNewRecord)
    await stepCall(job, routes, call, 'planned', `planned for ${technician.name}`);
  // The promised arrival says in which shift the stop is; the times themselves are worked out anew.
  stop.set({
    arriveAt: new Date(planned.arriveAt),
    finishAt: new Date(planned.finishAt),
    because: planned.because.slice(0, 300),
    // Where the plan goes by the store; what is fetched there follows when the route is settled.
    fetches: planned.fetches ?? null,
  });
  route.push(stop);
}

const newStop = (
  { stormId }: Routes,
  technicianId: string,
  planned: PlannedStop,
  position: number,
): ActiveStop =>
  StopRecord.build({
    id: randomUUID(),
    stormId,
    technicianId,
    callId: planned.callId,
    position,
    state: 'planned',
    arriveAt: new Date(planned.arriveAt),
    finishAt: new Date(planned.finishAt),
    driveMinutes: planned.driveMinutes,
    because: planned.because.slice(0, 300),
  }) as ActiveStop;
