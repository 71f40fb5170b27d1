import { randomUUID } from 'node:crypto';
import type { AreaDto } from '@shared/contract/areas';
import type { BoardPicture } from '@shared/contract/board';
import type { FeederMap } from '@shared/contract/feeders';
import type { CallDetail, CallRow } from '@shared/contract/calls';
import type { NightLogDto, NightLogPreview } from '@shared/contract/night-logs';
import type { DrainDto } from '@shared/contract/office';
import type { PlanDto } from '@shared/contract/routes';
import { isOpen } from '@shared/domain/call-state';
import { HOUR_MS } from '@shared/domain/instant';
import { brokenInvariants } from '../../server/invariants/checks';
import { makeNightLog } from '../../server/night-log/make-night-log';
import { readLog } from '../../server/night-log/read-log';
import { Chance } from '../../server/demo/demo-calls';
import { demoOutages } from '../../server/demo/demo-outages';
import { openRegion } from '../../server/region/open-region';
import { readAddressBook } from '../../server/region/region-data';
import { demoRegion } from '../support/demo-county';
import { startPlanner } from '../support/planner';
import { aTechnician, dayOf, done } from '../support/routes';
import type { TestPerson } from '../support/server';
import { AFTERNOON, startTextLab, type TextLab, until } from '../support/texts';

const ROWS = 600;
const TECHNICIANS = 6;
const VISITS_EACH = 3;

let lab: TextLab;
let planner: Awaited<ReturnType<typeof startPlanner>>;
let log: ReturnType<typeof makeNightLog>;
let power: FeederMap;

beforeAll(async () => {
  const imported = await demoRegion();
  const region = await openRegion(imported);
  power = region.power;
  const { addresses } = await readAddressBook(imported.folder);
  planner = await startPlanner();
  lab = await startTextLab({
    region,
    planner: planner.planner,
    logReader: { run: (order) => Promise.resolve(readLog(order)) },
  });
  const step = Math.floor(addresses.length / (ROWS + 50));
  log = makeNightLog({
    seed: 3,
    rows: ROWS,
    addresses: addresses
      .filter((_, i) => i % step === 0)
      .map(({ at, number, street, city, postcode }) => ({
        number,
        street,
        city,
        postcode,
        lon: at[0],
        lat: at[1],
      })),
    night: { fromAt: AFTERNOON - 12 * HOUR_MS, toAt: AFTERNOON - 3 * HOUR_MS },
    zone: region.dto.timeZone,
  });
});
afterAll(async () => {
  await lab.close();
  await planner.close();
});

const inStorm = () => ({ stormId: lab.server.stormId });
const board = async (desk: TestPerson): Promise<BoardPicture> =>
  (await desk.call('boardPicture', { params: inStorm() })).body as BoardPicture;

/** Gives an answer that has to be good before the story can go on. */
async function expected<T>(
  asked: PromiseLike<{ status: number; text: string; body: unknown }>,
): Promise<T> {
  const reply = await asked;
  if (reply.status >= 300) throw new Error(`${String(reply.status)} ${reply.text}`);
  return reply.body as T;
}

it('runs from a night log of 600 rows to a drained backlog, and every invariant holds', async () => {
  await lab.reset();
  const { server } = lab;
  const mara = await server.signIn('dispatcher', 'Mara Quill');
  const ines = await server.signIn('manager', 'Ines Calloway');
  const technicians: Awaited<ReturnType<typeof aTechnician>>[] = [];
  for (let i = 0; i < TECHNICIANS; i++)
    technicians.push(await aTechnician(server, `Technician ${String(i + 1)}`));
  // At the product's own pace: whoever queues a text wakes it.
  lab.work({ pollMs: 500 });

  // The areas, with the times the power went and came back.
  const outAt = AFTERNOON - 13 * HOUR_MS;
  for (const { name, shape } of demoOutages(power, new Chance('main job'), outAt, AFTERNOON))
    await expected<AreaDto>(
      mara.call('drawArea', {
        params: inStorm(),
        body: {
          commandId: randomUUID(),
          areaId: randomUUID(),
          name,
          shape,
          outAt,
          backAt: AFTERNOON - 8 * HOUR_MS,
        },
      }),
    );

  // The log, imported; the maker knows how many households it holds.
  const preview = await expected<NightLogPreview>(
    mara.call('uploadNightLog', {
      params: inStorm(),
      query: { fileName: 'night.csv' },
      bytes: Buffer.from(log.bytes),
    }),
  );
  const importing = await expected<NightLogDto>(
    mara.call('importNightLog', {
      params: { logId: preview.log.id },
      body: {
        commandId: randomUUID(),
        columns: preview.log.columns.map(({ role }) => role),
      },
    }),
  );
  let imported = importing;
  while (imported.state === 'importing') {
    await new Promise((resolve) => setTimeout(resolve, 200));
    imported = await expected(mara.call('readNightLog', { params: { logId: preview.log.id } }));
  }
  const households = new Set(
    log.truth.filter(({ kind }) => kind === 'call').map(({ household }) => household),
  );
  const { calls } = await board(mara);
  expect(imported.state).toBe('imported');
  expect(calls.length).toBe(imported.counts.calls);
  // The maker and the reader may differ by a household in a hundred, never by more.
  expect(Math.abs(calls.length - households.size)).toBeLessThanOrEqual(households.size / 100);
  expect(imported.counts.aside).toBe(log.truth.filter(({ kind }) => kind === 'aside').length);

  // The phone check: every third settled by phone, the others in need of a visit.
  for (const [i, call] of calls.entries())
    await expected<CallDetail>(
      mara.call('concludeCall', {
        params: { callId: call.id },
        body: {
          commandId: randomUUID(),
          version: call.version,
          outcome: i % 3 === 0 ? 'running-again' : 'waiting',
          reason: '',
        },
      }),
    );

  // Routes: proposed, published; the first stops go to the phones.
  const plan = await expected<PlanDto>(
    mara.call('proposePlan', {
      params: inStorm(),
      body: { commandId: randomUUID(), planId: randomUUID(), seconds: 1 },
    }),
  );
  expect(plan.figures.stops).toBeGreaterThan(TECHNICIANS * VISITS_EACH);
  await expected<PlanDto>(
    mara.call('publishPlan', {
      params: { planId: plan.id },
      body: { commandId: randomUUID(), version: plan.version },
    }),
  );

  // The scripted technicians drive; whoever they travel to has said yes to texts.
  const visited: string[] = [];
  for (let visit = 0; visit < VISITS_EACH; visit++)
    for (const technician of technicians) {
      const [card] = (await dayOf(technician)).stops;
      if (!card) throw new Error('a technician without a stop');
      expect(card.stop.state).toBe('offered');
      const detail = await expected<CallDetail>(
        mara.call('readCall', { params: { callId: card.stop.callId } }),
      );
      await expected(
        mara.call('amendCall', {
          params: { callId: card.stop.callId },
          body: { commandId: randomUUID(), version: detail.row.version, mayText: true },
        }),
      );
      let stop = await done(technician, 'acceptStop', card.stop);
      stop = await done(technician, 'startTravel', stop, { from: null });
      stop = await done(technician, 'arrive', stop);
      await done(technician, 'finishStop', stop, {
        outcome: 'restored',
        note: 'new start relay',
        partsUsed: [],
      });
      if (detail.row.phone) visited.push(card.stop.callId);
    }

  // Each was told once, and the stand-in took no text twice.
  const texts = () => lab.accepted();
  await until(() => texts().length >= visited.length, 'everybody to be told');
  expect(texts().length).toBe(visited.length);
  expect(new Set(texts().map((entry) => JSON.stringify(entry))).size).toBe(visited.length);

  // The drain adds up.
  const drain = await expected<DrainDto>(
    ines.call('drain', { params: inStorm(), query: { bucketMinutes: '30' } }),
  );
  const now = drain.series.at(-1);
  const after: CallRow[] = (await board(mara)).calls;
  expect(now).toMatchObject({
    arrivals: calls.length,
    settledByVisit: TECHNICIANS * VISITS_EACH,
    settledByPhone: Math.ceil(calls.length / 3),
    open: after.filter(({ state }) => isOpen(state)).length,
  });
  const worth = after
    .flatMap(({ units }) => units.flatMap(({ compartments }) => compartments))
    .reduce((sum, { valueCents }) => sum + valueCents, 0);
  expect((now?.savedCents ?? 0) + (now?.lostCents ?? 0) + (now?.valueAtRiskCents ?? 0)).toBe(worth);
  expect(now?.savedCents).toBeGreaterThan(0);

  expect(await brokenInvariants(server.sequelize)).toEqual([]);
}, 300_000);
