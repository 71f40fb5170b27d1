import type { Sequelize, Transaction } from 'sequelize';
import type { BoardChange, DayChange } from '@shared/contract/realtime';
import type { Instant } from '@shared/domain/instant';
import { areaDtos } from '../areas/area-rows';
import { callRows } from '../calls/call-rows';
import { change, insert, select } from '../db/sql';
import { readSettings } from '../office/settings';
import { planDtos } from '../routes/plan-rows';
import { stopCards } from '../routes/stop-cards';
import { stopDtos } from '../routes/stop-rows';
import { stormRoadDtos } from '../storm-roads/storm-road-rows';
import { stormDto } from '../storms/storm-queries';
import { technicianDtos } from '../technicians/technician-rows';
import { messageDtos } from '../texts/message-rows';
import type { Touched } from './touched';

/** The stream that dispatchers, managers and owners share. */
export const BOARD = 'board';
export const dayStream = (technicianId: string): string => `technician:${technicianId}`;

const CALLS_PER_CHANGE = 200;

type Change = { readonly stream: string; readonly change: BoardChange | DayChange };

/**
 * Writes what a command changed into the streams of those who may see it, numbered in the order
 * of commits. A change without a storm is told to the open one, whose people are at work.
 *
 * @returns the storm whose streams grew, or `null`
 */
export async function appendChanges(
  sequelize: Sequelize,
  what: {
    readonly touched: Touched;
    readonly stormId: string | null;
    readonly now: Instant;
  },
  tx: Transaction,
): Promise<string | null> {
  const stormId = what.stormId ?? (await openStormId(sequelize, tx));
  if (stormId === null) return null;
  const changes = [
    ...(await boardChanges(sequelize, what.touched, stormId, what.now, tx)),
    ...(await dayChanges(sequelize, what.touched, tx)),
  ];
  if (changes.length === 0) return null;

  const byStream = new Map<string, Change[]>();
  for (const one of changes) {
    const group = byStream.get(one.stream);
    if (group) group.push(one);
    else byStream.set(one.stream, [one]);
  }
  // One order of locking for all commands: two streams can never wait for each other.
  for (const stream of [...byStream.keys()].sort())
    await append(sequelize, stormId, stream, byStream.get(stream) ?? [], what.now, tx);
  return stormId;
}

async function append(
  sequelize: Sequelize,
  stormId: string,
  stream: string,
  changes: readonly Change[],
  now: Instant,
  tx: Transaction,
): Promise<void> {
  const count = (): Promise<number> =>
    change(
      sequelize,
      'UPDATE feeds SET n = LAST_INSERT_ID(n + ?) WHERE storm_id = ? AND stream = ?',
      [changes.length, stormId, stream],
      tx,
    );
  // Not "INSERT … ON DUPLICATE KEY UPDATE": an insert locks the storm's row for its foreign key, and
  // by now others may hold that row and wait for one of ours.
  if ((await count()) === 0) {
    await insert(
      sequelize,
      'INSERT IGNORE INTO feeds (storm_id, stream, n) VALUES (?, ?, 0)',
      [stormId, stream],
      tx,
    );
    await count();
  }
  // LAST_INSERT_ID is this connection's own: the number that the counter has just reached.
  await insert(
    sequelize,
    `INSERT INTO feed_changes (storm_id, stream, n, at, \`change\`)
     VALUES ${changes.map(() => '(?, ?, LAST_INSERT_ID() - ?, ?, ?)').join(', ')}`,
    changes.flatMap((one, i) => [
      stormId,
      stream,
      changes.length - 1 - i,
      new Date(now),
      JSON.stringify(one.change),
    ]),
    tx,
  );
}

async function boardChanges(
  sequelize: Sequelize,
  touched: Touched,
  stormId: string,
  now: Instant,
  tx: Transaction,
): Promise<Change[]> {
  const changes: BoardChange[] = [];
  // A stop's technician and arrival time stand on the call's row too.
  const stops = await stopDtos(sequelize, { ids: [...touched.stops] }, tx);
  const callIds = new Set([...touched.calls, ...stops.map((stop) => stop.callId)]);
  const calls = await callRows(sequelize, { ids: [...callIds] }, now, tx);
  // In pieces: an outage area with new times may move a thousand calls at once.
  for (let i = 0; i < calls.length; i += CALLS_PER_CHANGE)
    changes.push({ kind: 'calls', calls: calls.slice(i, i + CALLS_PER_CHANGE) });
  if (stops.length > 0) changes.push({ kind: 'stops', stops });
  if (touched.areas.size + touched.areasGone.size > 0)
    changes.push({
      kind: 'areas',
      areas: await areaDtos(sequelize, { ids: [...touched.areas] }, tx),
      gone: [...touched.areasGone],
    });
  if (touched.stormRoads.size + touched.stormRoadsGone.size > 0)
    changes.push({
      kind: 'storm-roads',
      roads: await stormRoadDtos({ ids: [...touched.stormRoads] }, tx),
      gone: [...touched.stormRoadsGone],
    });
  if (touched.technicians.size > 0)
    changes.push({
      kind: 'technicians',
      technicians: await technicianDtos(sequelize, { ids: [...touched.technicians] }, tx),
    });
  for (const plan of await planDtos(sequelize, { ids: [...touched.plans] }, tx))
    changes.push({ kind: 'plan', plan });
  if (touched.messages.size > 0)
    changes.push({
      kind: 'messages',
      messages: await messageDtos(sequelize, { ids: [...touched.messages] }, tx),
    });
  if (touched.storm) changes.push({ kind: 'storm', storm: await stormDto(sequelize, stormId, tx) });
  if (touched.settings)
    changes.push({ kind: 'settings', settings: await readSettings(sequelize, tx) });
  return changes.map((one) => ({ stream: BOARD, change: one }));
}

async function dayChanges(
  sequelize: Sequelize,
  touched: Touched,
  tx: Transaction,
): Promise<Change[]> {
  const changes: Change[] = touched.left.map(({ technicianId, stopId, reason }) => ({
    stream: dayStream(technicianId),
    change: { kind: 'gone', stopId, reason },
  }));
  const { cards, ended } = await stopCards(
    sequelize,
    { stopIds: [...touched.stops], callIds: [...touched.calls] },
    tx,
  );
  for (const card of cards)
    changes.push({ stream: dayStream(card.stop.technicianId), change: { kind: 'stop', card } });
  for (const { technicianId, stopId, reason } of ended)
    changes.push({ stream: dayStream(technicianId), change: { kind: 'gone', stopId, reason } });
  for (const technician of await technicianDtos(sequelize, { ids: [...touched.technicians] }, tx))
    changes.push({ stream: dayStream(technician.id), change: { kind: 'technician', technician } });
  return changes;
}

async function openStormId(sequelize: Sequelize, tx: Transaction): Promise<string | null> {
  const [open] = await select<{ id: string }>(
    sequelize,
    "SELECT id FROM storms WHERE state = 'open'",
    [],
    tx,
  );
  return open?.id ?? null;
}
