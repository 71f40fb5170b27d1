import { createServer, type AddressInfo } from 'node:net';
import { playDrill, type DrillOptions } from '../../server/drill-program/drill';
import type { FoundServer } from '../../server/drill-program/find-server';
import { select } from '../../server/db/sql';
import { brokenInvariants } from '../../server/invariants/checks';
import { hashPassword } from '../../server/staff/passwords';
import { UserRecord } from '../../server/staff/user-record';
import { PASSWORD } from '../support/accounts';
import { testConfig } from '../support/config';
import { testDatabase } from '../support/database';
import { startPlanner } from '../support/planner';
import { startServer, type TestServer } from '../support/server';

jest.setTimeout(120_000);

let planner: Awaited<ReturnType<typeof startPlanner>>;
let server: TestServer;
let found: FoundServer;

beforeAll(async () => {
  planner = await startPlanner();
  const port = await freePort();
  const config = testConfig(testDatabase());
  const address = `http://127.0.0.1:${String(port)}`;
  server = await startServer({
    port,
    config: { http: { ...config.http, port, publicUrl: address } },
    // People of a drill work by the clock on the wall.
    context: { planner: planner.planner, clock: Date.now },
  });
  const signIns = [];
  for (const role of ['owner', 'dispatcher'] as const) {
    const email = `${role}@example.com`;
    const passwordHash = await hashPassword(PASSWORD);
    await UserRecord.create({
      id: crypto.randomUUID(),
      name: role,
      signInName: email,
      role,
      technicianId: null,
      passwordHash,
    });
    signIns.push({ role, name: role, email, password: PASSWORD });
  }
  found = { address, signIns };
});
afterAll(async () => {
  await server.close();
  await planner.close();
});

const options = (signal: AbortSignal, change: Partial<DrillOptions> = {}): DrillOptions => ({
  seed: 7,
  calls: 10,
  technicians: 2,
  // Four hours a second: a first visit is over after a few seconds.
  speed: 14_400,
  leastPlanSeconds: 0.4,
  // It ends when the spec has seen enough, not with the storm.
  hours: 100_000,
  isInsisted: false,
  signal,
  say: () => undefined,
  ...change,
});

it('is refused where the storm may be a real one', async () => {
  const told = options(new AbortController().signal);
  await expect(playDrill(found, told)).rejects.toMatchObject({ exitCode: 3 });
});

it('takes calls, plans and visits through the public door, and leaves everything in order', async () => {
  const ending = new AbortController();
  const drill = playDrill(found, options(ending.signal, { isInsisted: true }));
  let isOver = false;
  const over = drill.finally(() => (isOver = true));
  const visits = async (): Promise<number> => {
    const [row] = await select<{ n: number }>(
      server.sequelize,
      "SELECT COUNT(*) AS n FROM stops WHERE state = 'done'",
      [],
    );
    return Number(row?.n);
  };
  // The drill lasts until somebody was visited, however slow the machine is.
  while (!isOver && (await visits()) === 0)
    await new Promise((resolve) => setTimeout(resolve, 100));
  ending.abort();
  const { tally } = await over;
  expect(tally.faults).toEqual([]);
  expect(tally.visits).toBeGreaterThan(0);
  expect(tally.plansPublished).toBeGreaterThan(0);
  const broken = (await brokenInvariants(server.sequelize)).filter(
    // No outbox works here, so no text leaves.
    ({ invariant }) => !invariant.startsWith('no-text-is-forgotten'),
  );
  expect(broken).toEqual([]);
});

async function freePort(): Promise<number> {
  const probe = createServer();
  await new Promise<void>((resolve) => probe.listen(0, '127.0.0.1', resolve));
  const { port } = probe.address() as AddressInfo;
  await new Promise<void>((resolve) => probe.close(() => resolve()));
  return port;
}
