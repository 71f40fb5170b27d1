import { randomUUID } from 'node:crypto';
import type { Test } from 'supertest';
import type { CallDetail, TakeCall } from '@shared/contract/calls';
import type { RouteName } from '@shared/contract/paths';
import type { StopCard, StopDto, TechnicianDay } from '@shared/contract/routes';
import type { CallState } from '@shared/domain/call-state';
import { HOUR_MS } from '@shared/domain/instant';
import type { Skill } from '@shared/domain/skills';
import { select } from '../../server/db/sql';
import { ShiftRecord } from '../../server/technicians/technician-record';
import { CallRecord } from '../../server/calls/call-record';
import { aCall } from './calls';
import type { TestPerson, TestServer } from './server';

/** A call that waits for a visit. The skills are what the phone check would have found. */
export async function aWaitingCall(
  server: TestServer,
  desk: TestPerson,
  told: Partial<TakeCall> & { readonly skills?: Skill[] } = {},
): Promise<{ id: string; version: number; number: number }> {
  const { skills, ...call } = told;
  const body = aCall(server.now(), call);
  const taken = await desk.call('takeCall', { params: { stormId: server.stormId }, body });
  if (taken.status !== 201) throw new Error(taken.text);
  const { row } = taken.body as CallDetail;
  const concluded = await desk.call('concludeCall', {
    params: { callId: row.id },
    body: { commandId: randomUUID(), version: row.version, outcome: 'waiting', reason: '' },
  });
  if (concluded.status !== 200) throw new Error(concluded.text);
  if (skills) await CallRecord.update({ skills }, { where: { id: row.id } });
  const { version, number } = (concluded.body as CallDetail).row;
  return { id: row.id, version, number };
}

/** A technician on shift from an hour before now, for `hours`. */
export async function aTechnician(
  server: TestServer,
  name: string,
  hours = 10,
): Promise<TestPerson & { readonly technicianId: string }> {
  const person = await server.signIn('technician', name);
  const { technicianId } = person;
  if (technicianId === null) throw new Error('no technician');
  await ShiftRecord.create({
    id: randomUUID(),
    technicianId,
    startsAt: new Date(server.now() - HOUR_MS),
    endsAt: new Date(server.now() + hours * HOUR_MS),
  });
  return { ...person, technicianId };
}

export const put = (
  desk: TestPerson,
  call: { readonly id: string; readonly version: number },
  technicianId: string,
  position = 0,
): Test =>
  desk.call('addStop', {
    params: { callId: call.id },
    body: {
      commandId: randomUUID(),
      version: call.version,
      stopId: randomUUID(),
      technicianId,
      position,
    },
  });

/** Puts a call on a route by hand; the offer follows when it is the first. */
export async function aStop(
  server: TestServer,
  desk: TestPerson,
  technicianId: string,
  told: Parameters<typeof aWaitingCall>[2] = {},
): Promise<StopDto> {
  const call = await aWaitingCall(server, desk, told);
  const reply = await put(desk, call, technicianId, 100);
  if (reply.status !== 201) throw new Error(reply.text);
  return (reply.body as { stop: StopDto }).stop;
}

export const act = (
  person: TestPerson,
  route: RouteName,
  stop: { readonly id: string; readonly version: number },
  body: object = {},
): Test =>
  person.call(route, {
    params: { stopId: stop.id },
    body: { commandId: randomUUID(), version: stop.version, ...body },
  });

/** As `act`, for steps that have to work before the test's own claim. */
export async function done(
  person: TestPerson,
  route: RouteName,
  stop: { readonly id: string; readonly version: number },
  body: object = {},
): Promise<StopDto> {
  const reply = await act(person, route, stop, body);
  if (reply.status !== 200) throw new Error(reply.text);
  const answer = reply.body as { stop?: StopDto; card?: StopCard };
  const changed = answer.stop ?? answer.card?.stop;
  if (!changed) throw new Error('no stop in the answer');
  return changed;
}

export async function dayOf(technician: TestPerson): Promise<TechnicianDay> {
  const reply = await technician.call('technicianDay');
  if (reply.status !== 200) throw new Error(reply.text);
  return reply.body as TechnicianDay;
}

export async function stateOf(server: TestServer, callId: string): Promise<CallState | undefined> {
  const [call] = await select<{ state: CallState }>(
    server.sequelize,
    'SELECT state FROM calls WHERE id = ?',
    [callId],
  );
  return call?.state;
}

/** Waits until something holds; the announcement of a change comes after its reply. */
export async function until(holds: () => boolean, why: string): Promise<void> {
  // Only what will never hold takes so long, also on a busy machine.
  const end = Date.now() + 60_000;
  while (!holds()) {
    if (Date.now() > end) throw new Error(`never: ${why}`);
    await new Promise((resolve) => setTimeout(resolve, 10));
  }
}
