import { randomUUID } from 'node:crypto';
import path from 'node:path';
import { pino } from 'pino';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { MINUTE_MS } from '@shared/domain/instant';
import { ensureDemoRegion } from '../../server/region/demo-region';
import { openRegion } from '../../server/region/open-region';
import { readAddressBook } from '../../server/region/region-data';
import { CallRecord } from '../../server/calls/call-record';
import { StopRecord } from '../../server/routes/stop-record';
import { watchRoads } from '../../server/storm-roads/watch-roads';
import { TechnicianRecord } from '../../server/technicians/technician-record';
import { createRoadsWorker, RoadsClient } from '../../server/workers/roads-client';
import { startServer } from '../support/server';
import { sendOut, takeMany } from './full-board';
import { spread } from './quantiles';

const CALLS = 600;
const TECHNICIANS = 60;
const STOPS_EACH = 8;
const CLOSURES = 6;
const QUIET_MS = 20_000;

/**
 * From a dispatcher's closing of a road until the board hears the new times of the routes that led along
 * it, with the roads of the demo county and the loop that the server itself runs.
 */
async function main(): Promise<void> {
  const imported = await ensureDemoRegion(path.resolve('tiles'));
  const region = await openRegion(imported);
  const { addresses } = await readAddressBook(imported.folder);
  const thread = createRoadsWorker(path.resolve('dist/server/roads-worker.js'));
  const roads = new RoadsClient(thread);
  await roads.switchTo({ folder: imported.folder, name: imported.manifest.name });
  const server = await startServer({
    context: { region, roads, log: pino({ level: 'error' }), clock: () => Date.now() },
  });
  await takeMany(server, addresses, CALLS);
  await sendOut(server, addresses, TECHNICIANS, STOPS_EACH);
  const desk = await server.signIn('dispatcher');
  const watch = watchRoads(server.context);
  const socket = await desk.socket();
  const heard: { readonly at: number; readonly callIds: ReadonlySet<string> }[] = [];
  socket.on('board:changed', ({ change }) => {
    if (change.kind === 'stops')
      heard.push({
        at: performance.now(),
        callIds: new Set(change.stops.map(({ callId }) => callId)),
      });
  });

  const newTimes: number[] = [];
  const moved: number[] = [];
  let withoutEffect = 0;
  const firsts = await StopRecord.findAll({ where: { position: 0 }, limit: CLOSURES });
  for (const stop of firsts) {
    const road = await onTheWay(stop, roads);
    if (!road) continue;
    heard.length = 0;
    const began = performance.now();
    const reply = await desk.call('addStormRoad', {
      params: { stormId: server.stormId },
      body: {
        commandId: randomUUID(),
        stormRoadId: randomUUID(),
        kind: 'closed',
        name: 'Washed out',
        notes: '',
        shape: { type: 'line', points: road },
        startsAt: Date.now() - MINUTE_MS,
        endsAt: null,
        speedShare: null,
      },
    });
    if (reply.status !== 201) throw new Error(reply.text);
    const closed = reply.body as StormRoadDto;
    const news = await first(() => heard.find(({ callIds }) => callIds.has(stop.callId)));
    if (news) {
      newTimes.push(news.at - began);
      moved.push(news.callIds.size);
    } else withoutEffect++;
    const lifted = await desk.call('liftStormRoad', {
      params: { stormRoadId: closed.id },
      body: { commandId: randomUUID(), version: closed.version },
    });
    if (lifted.status !== 200) throw new Error(lifted.text);
    // Until the roads are as they were: the next closure is measured by itself.
    await first(() => (roads.followed.roads.length === 0 ? true : undefined));
  }
  await watch.stop();
  socket.disconnect();
  process.stdout.write(
    JSON.stringify({
      technicians: TECHNICIANS,
      stops: TECHNICIANS * STOPS_EACH,
      closures: newTimes.length + withoutEffect,
      /** The way round took as long, to the minute: nothing to announce. */
      withoutEffect,
      stopsMoved: spread(moved),
      closureToNewTimesMs: spread(newTimes),
    }),
  );
  await server.close();
  await thread.close();
}

/** The middle of the way to a technician's first stop. */
async function onTheWay(stop: StopRecord, roads: RoadsClient): Promise<[number, number][] | null> {
  const technician = await TechnicianRecord.findByPk(stop.technicianId, { rejectOnEmpty: true });
  const call = await CallRecord.findByPk(stop.callId, { rejectOnEmpty: true });
  if (technician.positionLon === null || technician.positionLat === null) return null;
  if (call.lon === null || call.lat === null) return null;
  const [leg] = await roads.path([
    [technician.positionLon, technician.positionLat],
    [call.lon, call.lat],
  ]);
  if (!leg || leg.line.length < 4) return null;
  const middle = Math.floor(leg.line.length / 2);
  return leg.line.slice(middle - 1, middle + 1).map(([lon, lat]) => [lon, lat]);
}

/** What it finds first, or null after a while. */
async function first<T>(find: () => T | undefined): Promise<T | null> {
  const until = performance.now() + QUIET_MS;
  while (performance.now() < until) {
    const found = find();
    if (found !== undefined) return found;
    await new Promise((resolve) => setTimeout(resolve, 2));
  }
  return null;
}

void main();
