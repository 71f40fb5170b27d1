import { kinks, polygon } from '@turf/turf';
import type { BodyOf } from '@shared/contract/http';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { Refusal } from '@shared/domain/errors';
import { stormRoadFault } from '@shared/domain/storm-roads';
import type { Job } from '../commands/run-command';
import { isDuplicateOf } from '../db/sql';
import { overtakePlans } from '../routes/overtake-plans';
import { lockOpenStorm } from '../storms/storm-queries';
import type { StormRecord } from '../storms/storm-record';
import { StormRoadRecord, type EarlierRoad } from './storm-road-record';
import { toStormRoadDto } from './storm-road-rows';

/** So many changes of one road can be taken back: our bound on what a row may hold. */
const MOST_CHANGES_KEPT = 20;
/** A storm with more standing ones has an area to draw instead: our bound, so that a board stays fast. */
const MOST_STANDING = 300;

type Told<Name extends 'addStormRoad' | 'changeStormRoad'> = BodyOf<Name>;
interface Seen {
  readonly stormRoadId: string;
  /** The version that the writer saw. */
  readonly version: number;
}

/** Puts a storm road on the map. @param state `reported` by a technician waits for a dispatcher */
export async function addStormRoad(
  job: Job,
  stormId: string,
  told: Told<'addStormRoad'>,
  state: 'confirmed' | 'reported' = 'confirmed',
): Promise<StormRoadDto> {
  const storm = await lockOpenStorm(stormId, job.tx);
  job.inStorm(stormId);
  const standing = await StormRoadRecord.count({
    where: { stormId, liftedAt: null },
    transaction: job.tx,
  });
  if (standing >= MOST_STANDING)
    throw new Refusal(
      'storm-road-unfit',
      `There are ${String(MOST_STANDING)} storm roads already. Lift some, or draw one area for several.`,
    );
  const road = StormRoadRecord.build({
    id: told.stormRoadId,
    stormId,
    kind: told.kind,
    state,
    name: told.name,
    notes: told.notes,
    shape: JSON.stringify(told.shape),
    startsAt: new Date(told.startsAt),
    endsAt: told.endsAt === null ? null : new Date(told.endsAt),
    speedShare: told.speedShare,
    madeBy: job.actor.name,
    madeAt: job.at,
    earlier: JSON.stringify([null]),
  });
  refuseUnfit(road);
  try {
    await road.save({ transaction: job.tx });
  } catch (error) {
    if (isDuplicateOf(error, 'PRIMARY'))
      throw new Refusal('already-used', 'A storm road with this id exists. Make a new id.');
    throw error;
  }
  job.touched.stormRoads.add(road.id);
  if (state === 'confirmed') await overtakePlans(job, storm);
  job.note(
    'storm-road',
    road.id,
    `${state === 'reported' ? 'reported' : 'added'} a ${road.kind} road`,
  );
  return toStormRoadDto(road);
}

export async function changeStormRoad(
  job: Job,
  { stormRoadId, version, commandId: _id, ...changes }: Told<'changeStormRoad'> & Seen,
): Promise<StormRoadDto> {
  const { storm, road } = await lockRoad(job, { stormRoadId, version });
  refuseLifted(road);
  remember(road);
  road.set({
    ...(changes.kind === undefined ? {} : { kind: changes.kind }),
    ...(changes.name === undefined ? {} : { name: changes.name }),
    ...(changes.notes === undefined ? {} : { notes: changes.notes }),
    ...(changes.shape === undefined ? {} : { shape: JSON.stringify(changes.shape) }),
    ...(changes.startsAt === undefined ? {} : { startsAt: new Date(changes.startsAt) }),
    ...(changes.endsAt === undefined
      ? {}
      : { endsAt: changes.endsAt === null ? null : new Date(changes.endsAt) }),
    ...(changes.speedShare === undefined ? {} : { speedShare: changes.speedShare }),
  });
  return saved(job, storm, road, `changed a ${road.kind} road`);
}

/** A dispatcher has looked at what a technician reported: from now on the routes go round it. */
export async function confirmStormRoad(job: Job, seen: Seen): Promise<StormRoadDto> {
  const { storm, road } = await lockRoad(job, seen);
  if (road.state !== 'reported')
    throw new Refusal('illegal-transition', `"${road.name}" is ${road.state} already.`);
  remember(road);
  road.state = 'confirmed';
  return saved(job, storm, road, `confirmed a ${road.kind} road`);
}

/** The road is open again from now on; a report is dismissed. What it was stays in the record. */
export async function liftStormRoad(job: Job, seen: Seen): Promise<StormRoadDto> {
  const { storm, road } = await lockRoad(job, seen);
  refuseLifted(road);
  remember(road);
  const ends = road.endsAt?.getTime() ?? Infinity;
  if (job.now > road.startsAt.getTime() && job.now < ends) road.endsAt = job.at;
  road.set({ state: 'lifted', liftedAt: job.at });
  return saved(job, storm, road, `lifted a ${road.kind} road`);
}

/** Takes the latest change back. @returns `null` when the road had just been added */
export async function undoStormRoad(job: Job, seen: Seen): Promise<StormRoadDto | null> {
  const { storm, road } = await lockRoad(job, seen);
  const changes = road.changes();
  const before = changes.pop();
  if (before === undefined)
    throw new Refusal('nothing-to-undo', `Nothing of "${road.name}" is left to take back.`);
  if (before === null) {
    await road.destroy({ transaction: job.tx });
    job.touched.stormRoadsGone.add(road.id);
    await overtakePlans(job, storm);
    job.note('storm-road', road.id, `took back the adding of a ${road.kind} road`);
    return null;
  }
  road.set({
    kind: before.kind,
    state: before.state,
    name: before.name,
    notes: before.notes,
    shape: JSON.stringify(before.shape),
    startsAt: new Date(before.startsAt),
    endsAt: before.endsAt === null ? null : new Date(before.endsAt),
    speedShare: before.speedShare,
    liftedAt: before.state === 'lifted' ? (road.liftedAt ?? job.at) : null,
    earlier: JSON.stringify(changes),
  });
  return saved(job, storm, road, `took back the latest change of a ${road.kind} road`);
}

async function saved(
  job: Job,
  storm: StormRecord,
  road: StormRoadRecord,
  summary: string,
): Promise<StormRoadDto> {
  refuseUnfit(road);
  road.version += 1;
  await road.save({ transaction: job.tx });
  job.touched.stormRoads.add(road.id);
  await overtakePlans(job, storm);
  job.note('storm-road', road.id, summary);
  return toStormRoadDto(road);
}

/** The road, with its storm locked first: the roads of a storm change one after the other. */
async function lockRoad(
  job: Job,
  { stormRoadId, version }: Seen,
): Promise<{ storm: StormRecord; road: StormRoadRecord }> {
  const seen = await StormRoadRecord.findByPk(stormRoadId, { transaction: job.tx });
  if (!seen) throw new Refusal('not-found', 'There is no such storm road.');
  const storm = await lockOpenStorm(seen.stormId, job.tx);
  const road = await StormRoadRecord.findByPk(stormRoadId, {
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  if (!road) throw new Refusal('not-found', 'The storm road was taken back just now.');
  job.inStorm(road.stormId);
  if (road.version !== version)
    throw new Refusal('stale-version', `"${road.name}" has changed.`, toStormRoadDto(road));
  return { storm, road };
}

function remember(road: StormRoadRecord): void {
  const { id: _id, version: _version, ...content } = road.toDomain();
  const before: EarlierRoad = { ...content, name: road.name, notes: road.notes };
  road.earlier = JSON.stringify([...road.changes(), before].slice(-MOST_CHANGES_KEPT));
}

function refuseLifted(road: StormRoadRecord): void {
  if (road.state === 'lifted')
    throw new Refusal('illegal-transition', `"${road.name}" is lifted. Take that back first.`);
}

function refuseUnfit(road: StormRoadRecord): void {
  const content = road.toDomain();
  const fault = stormRoadFault(content);
  if (fault !== null) throw new Refusal('storm-road-unfit', fault);
  const { shape } = content;
  if (shape.type !== 'area') return;
  if (kinks(polygon([shape.ring.map((point) => [...point])])).features.length > 0)
    throw new Refusal('outline-crosses-itself', 'The outline crosses itself. Draw it again.');
}
