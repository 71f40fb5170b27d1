import { createHash } from 'node:crypto';
import { setImmediate as breathe } from 'node:timers/promises';
import { Op } from 'sequelize';
import type { AddressSuggestion } from '@shared/contract/calls';
import { callsFollowAreas } from '../areas/calls-follow-areas';
import { CallRecord } from '../calls/call-record';
import { saveCall } from '../calls/change-call';
import { machine } from '../commands/actor';
import { runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { change, insert, select } from '../db/sql';
import { isWithin, type Box } from './is-within';
import { findRegion } from './region-folder';
import type { RegionInUse } from './region-in-use';
import { findSwitch, readSwitch, type RegionSwitch } from './switch-region';

/** Calls to a transaction: few enough to let the phones in between, enough to be quick. */
const PIECE = 60;
const LOCATOR = machine('Region switch');

type Outcome = 'located' | 'returned' | 'kept' | 'outside';

/**
 * Locates the storm's calls in the region that a switch has brought, in pieces of one command each;
 * a piece is known by its number, so that going on after a stop, or at two servers at once, repeats
 * nothing.
 *
 * A call is put back where it stood when the region was last in use, or is found by its address. One
 * that cannot be found keeps its text and its point, and is listed for a person. Where a call stood
 * in the region before is remembered, so that switching back puts it there again.
 */
export async function relocateCalls(
  context: Context,
  region: RegionInUse,
  switchId: string,
): Promise<void> {
  const found = await readSwitch(context.sequelize, switchId);
  if (!found || found.state === 'done' || found.toKey !== region.key) return;
  const { stormId, total } = found;
  if (stormId === null) return;
  const from = found.fromKey ? await findRegion(context.config.tilesFolder, found.fromKey) : null;
  for (let first = 1; first <= total; first += PIECE) {
    const last = Math.min(total, first + PIECE - 1);
    await relocatePiece(context, {
      region,
      found,
      stormId,
      first,
      last,
      fromBox: from?.manifest.bbox,
    });
    await tell(context, switchId);
  }
  await runCommand(
    context,
    { actor: LOCATOR, type: 'locateCalls', commandId: idOf(switchId, 'end'), asked: switchId },
    async (job) => {
      job.inStorm(stormId);
      // Their places have changed, and with them perhaps the areas that they lie in.
      await callsFollowAreas(job, stormId);
      await change(
        job.sequelize,
        "UPDATE region_switches SET state = 'done' WHERE id = ?",
        [switchId],
        job.tx,
      );
      job.note('region', switchId, `located the calls in the region ${found.toName}`);
      return null;
    },
  );
  await tell(context, switchId);
}

async function tell(context: Context, switchId: string): Promise<void> {
  const progress = await findSwitch(context.sequelize, switchId);
  if (progress) context.live.regionSwitchProgressed(progress);
}

interface Piece {
  readonly region: RegionInUse;
  readonly found: RegionSwitch;
  readonly stormId: string;
  readonly first: number;
  readonly last: number;
  readonly fromBox: Box | undefined;
}

async function relocatePiece(context: Context, piece: Piece): Promise<void> {
  const { region, found, stormId, first, last } = piece;
  const texts = await select<{ text: string }>(
    context.sequelize,
    'SELECT DISTINCT address_text AS text FROM calls WHERE storm_id = ? AND number BETWEEN ? AND ?',
    [stormId, first, last],
  );
  const places = new Map<string, AddressSuggestion | null>();
  for (const [i, { text }] of texts.entries()) {
    places.set(text, region.locate(text));
    // Looking up an address takes a millisecond; boards are served in between.
    if (i % 8 === 7) await breathe();
  }
  await runCommand(
    context,
    {
      actor: LOCATOR,
      type: 'locateCalls',
      commandId: idOf(found.id, String(first)),
      asked: [found.id, first],
    },
    (job) => movePiece(job, piece, places),
  );
}

async function movePiece(
  job: Job,
  { region, found, stormId, first, last, fromBox }: Piece,
  places: ReadonlyMap<string, AddressSuggestion | null>,
): Promise<null> {
  job.inStorm(stormId);
  const calls = await CallRecord.findAll({
    where: { stormId, number: { [Op.between]: [first, last] } },
    order: [['id', 'ASC']],
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  const remembered = await rememberedPoints(job, found.toKey, calls);
  if (found.fromKey !== null) await remember(job, found.fromKey, calls, fromBox);
  const counts: Record<Outcome, number> = { located: 0, returned: 0, kept: 0, outside: 0 };
  const listed: [string, Outcome][] = [];
  for (const call of calls) {
    // Text that was corrected a moment ago is looked up here, and holds the piece for a millisecond.
    const place = places.get(call.addressText) ?? region.locate(call.addressText);
    const outcome = placeCall(call, region.dto.bbox, remembered.get(call.id), place);
    counts[outcome]++;
    if (outcome === 'kept' || outcome === 'outside') listed.push([call.id, outcome]);
    if (call.changed()) await saveCall(job, call);
  }
  if (listed.length > 0)
    await insert(
      job.sequelize,
      'INSERT INTO region_switch_calls (switch_id, call_id, outcome) VALUES ?',
      [listed.map(([callId, outcome]) => [found.id, callId, outcome])],
      job.tx,
    );
  await change(
    job.sequelize,
    `UPDATE region_switches SET done = done + ?, located = located + ?, returned = returned + ?,
            kept = kept + ?, outside = outside + ? WHERE id = ?`,
    [calls.length, counts.located, counts.returned, counts.kept, counts.outside, found.id],
    job.tx,
  );
  job.note(
    'region',
    found.id,
    `looked for calls ${String(first)} to ${String(last)} in the region ${found.toName}`,
  );
  return null;
}

/** Sets where the call stands in the region, and says how that was known. */
function placeCall(
  call: CallRecord,
  box: Box,
  remembered: StoredPoint | undefined,
  place: AddressSuggestion | null,
): Outcome {
  if (remembered && remembered.address_text === call.addressText) {
    call.set({ lon: remembered.lon, lat: remembered.lat, addressKind: remembered.address_kind });
    return 'returned';
  }
  const { lonLat } = call.address();
  const isHere = lonLat !== null && isWithin(lonLat, box);
  // A person has set this pin in this very ground; no book knows better.
  if (isHere && call.addressKind === 'pin') return 'located';
  if (place) {
    call.set({ lon: place.lonLat[0], lat: place.lonLat[1], addressKind: place.kind });
    return 'located';
  }
  return isHere ? 'kept' : 'outside';
}

interface StoredPoint {
  call_id: string;
  address_text: string;
  lon: number | null;
  lat: number | null;
  address_kind: CallRecord['addressKind'];
}

async function rememberedPoints(
  job: Job,
  regionKey: string,
  calls: readonly CallRecord[],
): Promise<Map<string, StoredPoint>> {
  if (calls.length === 0) return new Map();
  const rows = await select<StoredPoint>(
    job.sequelize,
    `SELECT call_id, address_text, lon, lat, address_kind FROM call_points
      WHERE region_key = ? AND call_id IN (?)`,
    [regionKey, calls.map(({ id }) => id)],
    job.tx,
  );
  return new Map(rows.map((row) => [row.call_id, row]));
}

/** A point of an earlier region that the call merely kept is none of this region's. */
async function remember(
  job: Job,
  regionKey: string,
  calls: readonly CallRecord[],
  box: Box | undefined,
): Promise<void> {
  const theirs = calls.filter((call) => {
    const { lonLat } = call.address();
    return lonLat === null || !box || isWithin(lonLat, box);
  });
  if (theirs.length === 0) return;
  await insert(
    job.sequelize,
    `REPLACE INTO call_points (call_id, region_key, address_text, lon, lat, address_kind) VALUES ?`,
    [
      theirs.map((call) => [
        call.id,
        regionKey,
        call.addressText,
        call.lon,
        call.lat,
        call.addressKind,
      ]),
    ],
    job.tx,
  );
}

/** The same piece of the same switch has the same id. */
function idOf(switchId: string, piece: string): string {
  const hex = createHash('sha256').update(`${switchId} ${piece}`).digest('hex');
  return [
    hex.slice(0, 8),
    hex.slice(8, 12),
    `4${hex.slice(13, 16)}`,
    `8${hex.slice(17, 20)}`,
    hex.slice(20, 32),
  ].join('-');
}
