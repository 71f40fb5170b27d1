import { randomUUID } from 'node:crypto';
import { parse } from 'csv-parse/sync';
import type { CallDetail } from '@shared/contract/calls';
import type { ForecastDto, PartsAheadDto, WhatIfDto } from '@shared/contract/forecast';
import type { DrainDto } from '@shared/contract/office';
import type { StopDto } from '@shared/contract/routes';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { forecast as playForecast } from '@shared/domain/forecast/forecast';
import type { ForecastRequest } from '../../server/workers/forecast-client';
import type { ForecastPort } from '../../server/workers/ports';
import { WorkerError } from '../../server/workers/worker-client';
import { ShiftRecord } from '../../server/technicians/technician-record';
import { aCall, aUnit } from '../support/calls';
import { NIGHT, startServer, type TestPerson, type TestServer } from '../support/server';

/** The forecast in this thread, and what it was asked. */
const asked: ForecastRequest[] = [];
let isStuck = false;
const forecast: ForecastPort = {
  run: (request, { signal } = {}) => {
    asked.push(request);
    if (isStuck)
      return new Promise((_, reject) => {
        signal?.addEventListener('abort', () => {
          stopped += 1;
          reject(new WorkerError('cancelled', 'told to stop'));
        });
      });
    const { facts, seed, change } = request;
    const made = playForecast(facts, { seed, futures: 20, ...(change ? { change } : {}) });
    return Promise.resolve({ ...made, elapsedMs: 1 });
  },
};
let stopped = 0;

/** A busy machine is no fault. */
jest.setTimeout(60_000);

let server: TestServer;
let mara: TestPerson;
let ines: TestPerson;
beforeAll(async () => (server = await startServer({ context: { forecast } })));
afterAll(() => server.close());
beforeEach(async () => {
  isStuck = false;
  asked.length = 0;
  await server.reset();
  mara = await server.signIn('dispatcher', 'Mara Quill');
  ines = await server.signIn('manager', 'Ines Calloway');
});

/** USDA FSIS, "Food Safety During Power Outage": a half-full freezer holds for 24 hours. */
const HALF_FULL_FREEZER_MS = 24 * HOUR_MS;
const CENTS = 30_000;

async function taken(told: Parameters<typeof aCall>[1] = {}): Promise<CallDetail> {
  const reply = await mara.call('takeCall', {
    params: { stormId: server.stormId },
    body: aCall(server.now(), { powerBackAt: null, ...told }),
  });
  expect(reply.status).toBe(201);
  return reply.body as CallDetail;
}

async function concluded(call: CallDetail, outcome: string, more: object = {}): Promise<void> {
  const { status, body } = await mara.call('concludeCall', {
    params: { callId: call.row.id },
    body: {
      commandId: randomUUID(),
      version: call.row.version,
      outcome,
      reason: 'said on the phone',
      ...more,
    },
  });
  expect([status, (body as CallDetail).row?.state]).toEqual([200, outcome]);
}

async function visited(call: CallDetail, theo: TestPerson): Promise<void> {
  await concluded(call, 'waiting');
  const { body } = await mara.call('readCall', { params: { callId: call.row.id } });
  const added = await mara.call('addStop', {
    params: { callId: call.row.id },
    body: {
      commandId: randomUUID(),
      version: (body as CallDetail).row.version,
      stopId: randomUUID(),
      technicianId: theo.technicianId,
      position: 0,
    },
  });
  expect(added.status).toBe(201);
  let stop = (added.body as { stop: StopDto }).stop;
  const step = async (route: 'acceptStop' | 'startTravel' | 'arrive' | 'finishStop', more = {}) => {
    const reply = await theo.call(route, {
      params: { stopId: stop.id },
      body: { commandId: randomUUID(), version: stop.version, ...more },
    });
    expect([route, reply.status]).toEqual([route, 200]);
    stop = (reply.body as { card: { stop: StopDto } }).card.stop;
  };
  await step('acceptStop');
  await step('startTravel', { from: null });
  await step('arrive');
  await step('finishStop', { outcome: 'restored', note: '', partsUsed: [] });
}

async function drain(query: Record<string, string> = {}): Promise<DrainDto> {
  const reply = await ines.call('drain', { params: { stormId: server.stormId }, query });
  expect(reply.status).toBe(200);
  return reply.body as DrainDto;
}

const last = ({ series }: DrainDto): DrainDto['series'][number] => {
  const point = series.at(-1);
  if (!point) throw new Error('no point');
  return point;
};

const at = (moment: Instant): void => server.setNow(moment);

describe('the drain of a storm', () => {
  it('is one point of nothing while no call has come in', async () => {
    const empty = await drain();
    expect(empty.series).toEqual([
      {
        at: NIGHT,
        arrivals: 0,
        settledByPhone: 0,
        settledByVisit: 0,
        open: 0,
        valueAtRiskCents: 0,
        savedCents: 0,
        lostCents: 0,
      },
    ]);
  });

  it('counts calls as they come in and are settled, by phone and by visit', async () => {
    const theo = await server.signIn('technician', 'Theo Larkspur');
    const calls = [await taken(), await taken(), await taken(), await taken(), await taken()];
    at(NIGHT + 20 * MINUTE_MS);
    await concluded(calls[0]!, 'running-again');
    await concluded(calls[1]!, 'referred');
    at(NIGHT + 40 * MINUTE_MS);
    await visited(calls[2]!, theo);
    at(NIGHT + HOUR_MS);

    const seen = await drain({ bucketMinutes: '10' });
    expect(last(seen)).toMatchObject({
      at: NIGHT + HOUR_MS,
      arrivals: 5,
      settledByPhone: 2,
      settledByVisit: 1,
      open: 2,
    });
    const half = seen.series.find((point) => point.at === NIGHT + 30 * MINUTE_MS);
    expect(half).toMatchObject({ arrivals: 5, settledByPhone: 2, settledByVisit: 0, open: 3 });
  });

  it('keeps every call and every cent in exactly one column, at every moment and in every group', async () => {
    const theo = await server.signIn('technician', 'Theo Larkspur');
    const area = randomUUID();
    await mara.call('drawArea', {
      params: { stormId: server.stormId },
      body: {
        commandId: randomUUID(),
        areaId: area,
        name: 'Larch 1',
        shape: [
          [
            [
              [-47.71, 36.39],
              [-47.69, 36.39],
              [-47.69, 36.41],
              [-47.71, 36.41],
              [-47.71, 36.39],
            ],
          ],
        ],
        outAt: NIGHT - 2 * HOUR_MS,
        backAt: null,
      },
    });
    const worth = [11_111, 22_222, 33_333, 44_444];
    const calls: CallDetail[] = [];
    for (const [index, valueCents] of worth.entries()) {
      at(NIGHT + index * 7 * MINUTE_MS);
      calls.push(
        await taken({
          units: [aUnit({ valueCents }), aUnit({ valueCents: 1 })],
          ...(index === 3
            ? {
                address: { text: 'Far off', unitNo: '', lonLat: [-47.6, 36.5], kind: 'pin' },
              }
            : {}),
        }),
      );
    }
    at(NIGHT + HOUR_MS);
    await concluded(calls[0]!, 'running-again');
    await visited(calls[1]!, theo);
    at(NIGHT + 30 * HOUR_MS);

    const seen = await drain({ bucketMinutes: '60' });
    for (const point of [...seen.series, ...seen.byArea, ...seen.byTechnician])
      expect(point.open + point.settledByPhone + point.settledByVisit).toBe(point.arrivals);
    const valueOf = (point: { valueAtRiskCents: number; savedCents: number; lostCents: number }) =>
      point.valueAtRiskCents + point.savedCents + point.lostCents;
    const whole = worth.reduce((sum, cents) => sum + cents + 1, 0);
    expect(valueOf(last(seen))).toBe(whole);
    for (const groups of [seen.byArea, seen.byTechnician]) {
      expect(groups.reduce((sum, group) => sum + group.arrivals, 0)).toBe(worth.length);
      expect(groups.reduce((sum, group) => sum + valueOf(group), 0)).toBe(whole);
    }
    expect(last(seen)).toMatchObject({
      savedCents: 11_111 + 1 + 22_222 + 1,
      lostCents: 33_333 + 1 + 44_444 + 1,
      valueAtRiskCents: 0,
    });
    expect(seen.byArea.map(({ name, arrivals }) => [name, arrivals])).toEqual([
      ['Larch 1', 3],
      ['Outside every outage area', 1],
    ]);
    expect(seen.byTechnician.find(({ name }) => name === 'Theo Larkspur')).toMatchObject({
      settledByVisit: 1,
      savedCents: 22_223,
    });
  });

  it('moves value from at risk to lost when the save-by passes, though nobody did anything', async () => {
    await taken({ powerOutAt: NIGHT - 2 * HOUR_MS });
    const saveBy = NIGHT - 2 * HOUR_MS + HALF_FULL_FREEZER_MS;
    at(saveBy - MINUTE_MS);
    expect(last(await drain())).toMatchObject({ valueAtRiskCents: CENTS, lostCents: 0 });
    at(saveBy + MINUTE_MS);
    expect(last(await drain())).toMatchObject({ valueAtRiskCents: 0, lostCents: CENTS });
  });

  it('counts the household of a duplicate once in value, and twice as a call', async () => {
    const first = await taken();
    const again = await taken();
    await concluded(again, 'duplicate', { duplicateOfId: first.row.id });
    expect(last(await drain())).toMatchObject({
      arrivals: 2,
      settledByPhone: 1,
      open: 1,
      valueAtRiskCents: CENTS,
      lostCents: 0,
    });
  });

  it('stands still from the moment the storm was closed', async () => {
    await taken();
    at(NIGHT + HOUR_MS);
    const closing = await ines.call('closeStorm', {
      params: { stormId: server.stormId },
      body: { commandId: randomUUID(), version: 0 },
    });
    expect(closing.status).toBe(200);
    at(NIGHT + 90 * HOUR_MS);
    const seen = await drain();
    expect(seen.at).toBe(NIGHT + HOUR_MS);
    expect(last(seen)).toMatchObject({ open: 1, valueAtRiskCents: CENTS, lostCents: 0 });
  });

  it.each([
    ['a bucket of two minutes', { bucketMinutes: '2' }, '/bucketMinutes'],
    ['a bucket that is no number', { bucketMinutes: 'soon' }, '/bucketMinutes'],
    ['a format that nobody writes', { format: 'xlsx' }, '/format'],
  ])('refuses %s', async (_what, query, pointer) => {
    const reply = await ines.call('drain', {
      params: { stormId: server.stormId },
      query,
    });
    expect(reply.status).toBe(422);
    expect((reply.body as { errors: { pointer: string }[] }).errors[0]?.pointer).toBe(pointer);
  });

  it('is not found for a storm that never was', async () => {
    const reply = await ines.call('drain', { params: { stormId: randomUUID() } });
    expect([reply.status, (reply.body as { type: string }).type]).toEqual([
      404,
      '/problems/not-found',
    ]);
  });

  it.each(['dispatcher', 'technician'] as const)('is not for a %s', async (role) => {
    const person = await server.signIn(role);
    const reply = await person.call('drain', { params: { stormId: server.stormId } });
    expect(reply.status).toBe(403);
  });
});

describe('the drain as CSV', () => {
  const csv = async (query = {}): Promise<string[][]> => {
    const reply = await ines.call('drain', {
      params: { stormId: server.stormId },
      query: { format: 'csv', ...query },
    });
    expect(reply.status).toBe(200);
    expect(reply.headers['content-type']).toBe('text/csv; charset=utf-8');
    expect(reply.headers['content-disposition']).toMatch(
      /^attachment; filename="?backlog-drain\.csv"?$/,
    );
    expect(reply.text.startsWith('\uFEFF')).toBe(true);
    return parse(reply.text, { bom: true, relax_column_count: true, skip_empty_lines: true });
  };

  it('holds the same figures as the drain, in dollars and in the region’s time', async () => {
    await taken({ units: [aUnit({ valueCents: 12_345 })] });
    at(NIGHT + 20 * MINUTE_MS);
    const rows = await csv({ bucketMinutes: '10' });
    expect(rows[0]).toEqual([
      'Time',
      'Arrivals',
      'Settled by phone',
      'Settled by visit',
      'Open',
      'Value at risk (USD)',
      'Saved (USD)',
      'Lost (USD)',
    ]);
    const seen = await drain({ bucketMinutes: '10' });
    const times = rows.slice(1, 1 + seen.series.length);
    // 06:20 UTC on 2026-10-03 is 02:20 in New York.
    expect(times.at(-1)).toEqual([
      '2026-10-03 02:20',
      '1',
      '0',
      '0',
      '1',
      '123.45',
      '0.00',
      '0.00',
    ]);
    expect(times).toHaveLength(seen.series.length);
    expect(rows.find(([first]) => first === 'Forecast')).toEqual([
      'Forecast',
      '10 %',
      '50 %',
      '90 %',
    ]);
    expect(rows.find(([first]) => first === 'Lost from now on (USD)')).toHaveLength(4);
    expect(rows.at(-1)).toEqual(['Map data', server.context.region.dto.attribution]);
  });

  it('makes no formula of a name that begins like one', async () => {
    await mara.call('drawArea', {
      params: { stormId: server.stormId },
      body: {
        commandId: randomUUID(),
        areaId: randomUUID(),
        name: '=HYPERLINK("http://example.com","x")',
        shape: [
          [
            [
              [-47.71, 36.39],
              [-47.69, 36.39],
              [-47.69, 36.41],
              [-47.71, 36.41],
              [-47.71, 36.39],
            ],
          ],
        ],
        outAt: NIGHT - 2 * HOUR_MS,
        backAt: null,
      },
    });
    await taken();
    const names = (await csv()).map(([first]) => first);
    expect(names).toContain(`'=HYPERLINK("http://example.com","x")`);
  });
});

describe('looking ahead', () => {
  const params = () => ({ stormId: server.stormId });
  const NOTHING = {
    technicians: 0,
    overtimeHours: 0,
    secondShift: 0,
    phoneStaff: 0,
    partsOnEachVan: 0,
  };
  const shiftFor = (technician: TestPerson) =>
    ShiftRecord.create({
      id: randomUUID(),
      technicianId: technician.technicianId ?? '',
      startsAt: new Date(NIGHT),
      endsAt: new Date(NIGHT + 60 * HOUR_MS),
    });
  const forecastNow = async (): Promise<ForecastDto> => {
    const reply = await ines.call('forecast', { params: params() });
    expect([reply.status, reply.text.slice(0, 200)]).toEqual([200, expect.any(String)]);
    return reply.body as ForecastDto;
  };

  it('is made from what was seen, and is empty when the visits are done', async () => {
    const theo = await server.signIn('technician', 'Theo Larkspur');
    await shiftFor(theo);
    const calls = [await taken(), await taken(), await taken()];
    at(NIGHT + 10 * MINUTE_MS);
    await concluded(calls[0]!, 'running-again');
    await visited(calls[1]!, theo);
    await concluded(calls[2]!, 'waiting');
    at(NIGHT + HOUR_MS);
    const { outlook, restsOn, phone } = await forecastNow();
    expect(outlook.emptyAt.low).toBeGreaterThan(NIGHT + HOUR_MS);
    expect(outlook.curve[0]).toMatchObject({ at: NIGHT + HOUR_MS, open: { middle: 1 } });
    expect(phone.staffNow).toBe(1);
    expect(restsOn.join(' ')).toContain('1 of 3 calls checked');
    const { facts } = asked[0]!;
    expect(facts.calls.map(({ stage }) => stage)).toEqual(['visit']);
    expect(facts.otherRingsAt).toHaveLength(3);
    expect(facts.visits).toMatchObject({ restored: 1, usualServiceMinutes: 45 });
    expect(facts.technicians.map(({ route }) => route)).toEqual([[]]);
  });

  it('is told again within a minute, and made anew after it', async () => {
    await taken();
    await forecastNow();
    at(NIGHT + 30_000);
    await forecastNow();
    expect(asked).toHaveLength(1);
    at(NIGHT + 2 * MINUTE_MS);
    await forecastNow();
    expect(asked).toHaveLength(2);
  });

  it('tells what more technicians would do, and changes nothing', async () => {
    const theo = await server.signIn('technician', 'Theo Larkspur');
    await shiftFor(theo);
    for (let i = 0; i < 6; i++) await concluded(await taken(), 'waiting');
    // By noon it is clear that calls do not pour in.
    at(NIGHT + 10 * HOUR_MS);
    const reply = await ines.call('whatIf', {
      params: params(),
      body: { ...NOTHING, technicians: 3 },
    });
    expect(reply.status).toBe(200);
    const { difference, changed, asItIs } = reply.body as WhatIfDto;
    expect(difference.emptyHours.middle).toBeLessThan(-1);
    expect(changed.emptyAt.middle).toBeLessThan(asItIs.emptyAt.middle ?? 0);
    const { body } = await mara.call('listTechnicians');
    expect((body as { technicians: unknown[] }).technicians).toHaveLength(1);
  });

  it('lets go of a question that nobody waits for', async () => {
    await taken();
    isStuck = true;
    const before = stopped;
    const question = ines.call('whatIf', {
      params: params(),
      body: { ...NOTHING, phoneStaff: 1 },
    });
    const aborted = question.then(
      () => 'answered',
      () => 'aborted',
    );
    while (asked.length === 0) await new Promise((done) => setTimeout(done, 10));
    question.abort();
    while (stopped === before) await new Promise((done) => setTimeout(done, 10));
    void aborted;
    expect(stopped).toBe(before + 1);
  });

  it('refuses what cannot be, and a storm that is closed', async () => {
    const wrong = await ines.call('whatIf', {
      params: params(),
      body: { ...NOTHING, overtimeHours: 40 },
    });
    expect(wrong.status).toBe(422);
    expect((wrong.body as { errors: { pointer: string }[] }).errors[0]?.pointer).toBe(
      '/overtimeHours',
    );
    await ines.call('closeStorm', {
      params: params(),
      body: { commandId: randomUUID(), version: 0 },
    });
    for (const route of ['forecast', 'partsAhead'] as const) {
      const { status, body } = await ines.call(route, { params: params() });
      expect([route, status, (body as { type: string }).type]).toEqual([
        route,
        409,
        '/problems/storm-closed',
      ]);
    }
  });

  it('says what each van lacks for its stops, also as a file', async () => {
    const theo = await server.signIn('technician', '=Theo');
    await shiftFor(theo);
    const call = await taken();
    await concluded(call, 'waiting');
    await concluded(await taken(), 'waiting');
    const { body } = await mara.call('readCall', { params: { callId: call.row.id } });
    await mara.call('addStop', {
      params: { callId: call.row.id },
      body: {
        commandId: randomUUID(),
        version: (body as CallDetail).row.version,
        stopId: randomUUID(),
        technicianId: theo.technicianId,
        position: 0,
      },
    });
    const parts = (await ines.call('partsAhead', { params: params() })).body as PartsAheadDto;
    expect(parts.waitingCalls).toBe(1);
    const [van] = parts.vans;
    expect(van).toMatchObject({ name: '=Theo', stops: 1 });
    for (const one of van!.parts) expect(one).toMatchObject({ onVan: 0, lackChance: one.expected });
    expect(van!.lackChance).toBeGreaterThan(0.3);

    const file = await ines.call('partsAhead', { params: params(), query: { format: 'csv' } });
    expect(file.headers['content-disposition']).toContain('parts-to-load.csv');
    const rows: string[][] = parse(file.text, { bom: true, relax_column_count: true });
    expect(rows[0]?.[0]).toBe('Technician');
    expect(rows[1]?.[0]).toBe("'=Theo");
  });
});
