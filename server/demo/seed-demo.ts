import { mkdir, writeFile } from 'node:fs/promises';
import path from 'node:path';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import type { Role } from '@shared/contract/common';
import { AreaRecord } from '../areas/area-record';
import { CallRecord } from '../calls/call-record';
import { concludeCall } from '../calls/check-by-phone';
import { takeCall } from '../calls/take-call';
import { machine } from '../commands/actor';
import { runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { change } from '../db/sql';
import type { AddressPoint } from '../region/address-points';
import { changeSettings } from '../office/change-settings';
import { readSettings } from '../office/settings';
import { DEMO_SEED } from '../region/demo-region';
import { hashPassword, makePassword } from '../staff/passwords';
import { UserRecord } from '../staff/user-record';
import { StormRecord } from '../storms/storm-record';
import { ShiftRecord, TechnicianRecord } from '../technicians/technician-record';
import { Chance, demoCall, ringsAfter } from './demo-calls';
import { demoCallers } from './demo-callers';
import { demoOutages } from './demo-outages';
import { DESK, TECHNICIANS, type DemoPerson } from './demo-people';

const CALLS = 240;
/** Of the calls that were checked, these many hundredths were settled by phone. */
const SETTLED_BY_PHONE = 0.3;
const WAITING = 0.75;
const BREAK_MINUTES = 30;

/**
 * Fills an empty database with the demo's people and an open storm, by the same commands that
 * people give, with the clock set back to when each would have been given. Passwords are made
 * here and written beside the data, readable by its owner alone.
 */
export async function seedDemo(
  context: Context,
  addresses: readonly AddressPoint[],
): Promise<void> {
  if ((await UserRecord.count()) > 0) return;
  const now = context.clock();
  const chance = new Chance(`demo storm ${String(DEMO_SEED)}`);
  const signIns = await seedPeople(context, chance, addresses, now);
  await mkdir(context.config.dataFolder, { recursive: true });
  await writeFile(
    path.join(context.config.dataFolder, 'demo-sign-ins.json'),
    JSON.stringify(signIns, null, 2),
    { mode: 0o600 },
  );
  await seedStore(context, chance, addresses);
  await seedStorm(context, chance, addresses, now);
  // What households were told in the demo's past lies in the past: nothing of it is sent now.
  await change(
    context.sequelize,
    "UPDATE messages SET state = 'delivered', trouble = NULL WHERE state = 'new'",
    [],
  );
}

async function seedPeople(
  context: Context,
  chance: Chance,
  addresses: readonly AddressPoint[],
  now: Instant,
): Promise<{ role: Role; name: string; email: string; password: string }[]> {
  const signIns: { role: Role; name: string; email: string; password: string }[] = [];
  const account = async (person: DemoPerson, technicianId: string | null): Promise<void> => {
    const password = makePassword();
    await UserRecord.create({
      id: chance.uuid(),
      name: person.name,
      signInName: person.email,
      role: person.role,
      technicianId,
      passwordHash: await hashPassword(password),
    });
    const { role, name, email } = person;
    signIns.push({ role, name, email, password });
  };

  for (const person of DESK) await account(person, null);
  for (const [index, person] of TECHNICIANS.entries()) {
    const home = chance.pick(addresses).at;
    const technician = await TechnicianRecord.create({
      id: chance.uuid(),
      name: person.name,
      phone: `+125255501${String(10 + index)}`,
      skills: [...person.skills],
      van: person.van,
      startLon: home[0],
      startLat: home[1],
    });
    // On shift now and for the next days, whatever hour the demo is started at.
    for (let day = 0; day < 3; day++) {
      const startsAt = now + day * 24 * HOUR_MS - (day === 0 ? HOUR_MS : 0);
      // Not all at once, so that somebody is always on the road.
      const breakFrom = startsAt + (4 + (index % 3) / 2) * HOUR_MS;
      await ShiftRecord.create({
        id: chance.uuid(),
        technicianId: technician.id,
        startsAt: new Date(startsAt),
        endsAt: new Date(startsAt + 11 * HOUR_MS),
        breaks: [{ from: breakFrom, to: breakFrom + HOUR_MS, minutes: BREAK_MINUTES }],
      });
    }
    await account(person, technician.id);
  }
  return signIns;
}

/** The company's store stands in the middle of its doors, so that a van that lacks a part has a way there. */
async function seedStore(
  context: Context,
  chance: Chance,
  addresses: readonly AddressPoint[],
): Promise<void> {
  const middle = (axis: 0 | 1): number =>
    addresses.map(({ at }) => at[axis]).sort((a, b) => a - b)[addresses.length >> 1] ?? 0;
  const [lon, lat] = [middle(0), middle(1)];
  const far = ({ at }: AddressPoint): number => Math.hypot(at[0] - lon, at[1] - lat);
  const store = addresses.reduce((best, one) => (far(one) < far(best) ? one : best));
  const order = {
    actor: machine('Demo'),
    type: 'changeSettings',
    commandId: chance.uuid(),
    asked: null,
  };
  await runCommand(context, order, async (job) => {
    const { version } = await readSettings(context.sequelize, job.tx);
    await changeSettings(job, { commandId: order.commandId, version, shopPlace: [...store.at] });
    return null;
  });
}

async function seedStorm(
  context: Context,
  chance: Chance,
  addresses: readonly AddressPoint[],
  now: Instant,
): Promise<void> {
  const wentOut = now - 13 * HOUR_MS;
  const stormId = chance.uuid();
  const give = async (at: Instant, type: string, work: (job: Job) => Promise<void>) => {
    // A clock counts whole milliseconds; a moment drawn by chance need not.
    const then: Context = { ...context, clock: () => Math.floor(Math.min(at, now)) };
    await runCommand(
      then,
      { actor: machine('Demo'), type, commandId: chance.uuid(), asked: null },
      async (job) => {
        await work(job);
        return null;
      },
    );
  };

  await give(wentOut, 'openStorm', async (job) => {
    await StormRecord.create(
      { id: stormId, name: 'October gale', openedAt: job.at },
      { transaction: job.tx },
    );
    job.inStorm(stormId);
    job.touched.storm = true;
    job.note('storm', stormId, 'opened the storm');
  });

  const areas = demoOutages(context.region.power, chance, wentOut, now).map((outage) => ({
    ...outage,
    id: chance.uuid(),
  }));
  for (const area of areas)
    await give(wentOut + HOUR_MS, 'drawArea', async (job) => {
      await AreaRecord.create(
        {
          id: area.id,
          stormId,
          name: area.name,
          shape: JSON.stringify(area.shape),
          outAt: new Date(area.outAt),
          backAt: area.backAt === null ? null : new Date(area.backAt),
        },
        { transaction: job.tx },
      );
      job.inStorm(stormId);
      job.touched.areas.add(area.id);
      job.note('area', area.id, 'drew an outage area');
    });

  const calls = demoCallers(areas, addresses, chance, CALLS)
    .map(({ address, outAt, backAt }, number) => {
      const rings = backAt + ringsAfter(chance);
      const latest = now - chance.below(20) * MINUTE_MS;
      // Whoever would ring later has rung at some moment since: all of them now would be a burst that no
      // storm shows, and the forecast would take it for one.
      const receivedAt =
        rings <= latest ? rings : latest - chance.next() * Math.max(0, latest - backAt);
      return demoCall(chance, address, number, { receivedAt, outAt, backAt });
    })
    .sort((a, b) => a.receivedAt - b.receivedAt);

  for (const call of calls) {
    await give(call.receivedAt, 'takeCall', async (job) => {
      await takeCall(job, stormId, call);
    });
    const fate = chance.next();
    if (fate > SETTLED_BY_PHONE + WAITING * (1 - SETTLED_BY_PHONE)) continue;
    const outcome =
      fate > SETTLED_BY_PHONE
        ? 'waiting'
        : chance.pick(['running-again', 'running-again', 'running-again', 'referred'] as const);
    await give(
      call.receivedAt + (4 + chance.below(12)) * MINUTE_MS,
      'concludeCall',
      async (job) => {
        const taken = await CallRecord.findByPk(call.callId, { transaction: job.tx });
        await concludeCall(job, call.callId, {
          commandId: chance.uuid(),
          version: taken?.version ?? 0,
          outcome,
          reason: '',
        });
      },
    );
  }
}
