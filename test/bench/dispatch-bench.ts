import { randomUUID } from 'node:crypto';
import { open, rm } from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';
import type { CallDetail } from '@shared/contract/calls';
import { HOUR_MS } from '@shared/domain/instant';
import { ShiftRecord } from '../../server/technicians/technician-record';
import { aCall, aUnit } from '../support/calls';
import { NIGHT, startServer, type TestPerson } from '../support/server';
import { spread } from './quantiles';

const TECHNICIANS = 60;
const BOARDS = 20;
const INTAKE_SECONDS = 10;
const CLIENTS = 8;

/**
 * Intake commands a second, and how long it takes from a dispatcher's click until the stop is on the
 * technician's phone and on every board. Client and server share the cores here, so the machine's own
 * sync time is measured beside it, to compare with.
 */
async function main(): Promise<void> {
  const server = await startServer();
  const desks = await Promise.all(
    Array.from({ length: CLIENTS }, () => server.signIn('dispatcher')),
  );
  const syncMs = await syncTimes();

  const intake: number[] = [];
  const taken: CallDetail[] = [];
  const until = performance.now() + INTAKE_SECONDS * 1000;
  let phone = 0;
  await Promise.all(
    desks.map(async (desk) => {
      while (performance.now() < until) {
        phone += 1;
        const body = aCall(NIGHT, {
          phone: `+1${String(201 + Math.floor(phone / 10_000))}${String(5_550_000 + (phone % 10_000))}`,
          units: [aUnit()],
          mayText: false,
        });
        const began = performance.now();
        const reply = await desk.call('takeCall', { params: { stormId: server.stormId }, body });
        if (reply.status !== 201) throw new Error(reply.text);
        intake.push(performance.now() - began);
        taken.push(reply.body as CallDetail);
      }
    }),
  );

  // By then the claims of whoever took the calls have lapsed.
  server.setNow(NIGHT + HOUR_MS);
  const assign = await assignments(server, desks[0] as TestPerson, taken);
  process.stdout.write(
    JSON.stringify({
      diskSyncMs: spread(syncMs),
      intake: {
        clients: CLIENTS,
        perSecond: Math.round(intake.length / INTAKE_SECONDS),
        ms: spread(intake),
      },
      assignToPhone: { technicians: TECHNICIANS, boards: BOARDS, ...assign },
      memoryMb: Math.round(process.memoryUsage().rss / 2 ** 20),
    }),
  );
  await server.close();
}

async function assignments(
  server: Awaited<ReturnType<typeof startServer>>,
  desk: TestPerson,
  taken: readonly CallDetail[],
) {
  const heard = new Map<string, number>();
  const onBoards = new Map<string, number[]>();
  const sockets = [];
  const technicians: TestPerson[] = [];
  for (let i = 0; i < TECHNICIANS; i++) {
    const technician = await server.signIn('technician', `Technician ${String(i)}`);
    await ShiftRecord.create({
      id: randomUUID(),
      technicianId: technician.technicianId ?? '',
      startsAt: new Date(NIGHT - HOUR_MS),
      endsAt: new Date(NIGHT + 10 * HOUR_MS),
    });
    const socket = await technician.socket();
    socket.on('day:changed', ({ change }) => {
      if (change.kind === 'stop' && change.card.stop.state === 'offered')
        heard.set(change.card.stop.callId, performance.now());
    });
    sockets.push(socket);
    technicians.push(technician);
  }
  for (let i = 0; i < BOARDS; i++) {
    // Five windows at most for one account.
    const person = i % 4 === 0 ? await server.signIn('dispatcher') : (lastDesk ?? desk);
    lastDesk = person;
    const socket = await person.socket();
    socket.on('board:changed', ({ change }) => {
      if (change.kind !== 'stops') return;
      for (const stop of change.stops)
        onBoards.set(stop.callId, [...(onBoards.get(stop.callId) ?? []), performance.now()]);
    });
    sockets.push(socket);
  }

  const toPhone: number[] = [];
  const toLastBoard: number[] = [];
  for (const [i, technician] of technicians.entries()) {
    const call = taken[i];
    if (!call) break;
    const waiting = (
      await desk.call('concludeCall', {
        params: { callId: call.row.id },
        body: {
          commandId: randomUUID(),
          version: call.row.version,
          outcome: 'waiting',
          reason: '',
        },
      })
    ).body as CallDetail | { title: string };
    if (!('row' in waiting)) continue;
    const began = performance.now();
    const reply = await desk.call('addStop', {
      params: { callId: call.row.id },
      body: {
        commandId: randomUUID(),
        version: waiting.row.version,
        stopId: randomUUID(),
        technicianId: technician.technicianId,
        position: 0,
      },
    });
    if (reply.status !== 201) throw new Error(reply.text);
    while (!heard.has(call.row.id) || (onBoards.get(call.row.id)?.length ?? 0) < BOARDS)
      await new Promise((resolve) => setTimeout(resolve, 1));
    toPhone.push((heard.get(call.row.id) ?? 0) - began);
    toLastBoard.push(Math.max(...(onBoards.get(call.row.id) ?? [0])) - began);
  }
  for (const socket of sockets) socket.close();
  return { toPhoneMs: spread(toPhone), toLastBoardMs: spread(toLastBoard) };
}
let lastDesk: TestPerson | null = null;

/** How long this disk takes to make a write last: the floor under every command. */
async function syncTimes(): Promise<number[]> {
  const file = path.join(os.tmpdir(), `thawline-sync-${randomUUID()}`);
  const handle = await open(file, 'w');
  const times: number[] = [];
  for (let i = 0; i < 100; i++) {
    await handle.write('x');
    const began = performance.now();
    await handle.datasync();
    times.push(performance.now() - began);
  }
  await handle.close();
  await rm(file);
  return times;
}

void main();
