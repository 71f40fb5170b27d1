import path from 'node:path';
import { createPocketsWorker } from '../../server/workers/pockets-client';
import { ensureDemoRegion } from '../../server/region/demo-region';
import { readAddressBook } from '../../server/region/region-data';
import { spread } from './quantiles';

const POINTS = 3000;
const ROUNDS = 20;

/** Pockets of 3,000 open calls at addresses of the demo county, through the worker. */
async function main(): Promise<void> {
  const { folder } = await ensureDemoRegion(path.resolve('tiles'));
  const { addresses } = await readAddressBook(folder);
  const step = Math.floor(addresses.length / POINTS);
  const calls = addresses
    .filter((_, i) => i % step === 0)
    .slice(0, POINTS)
    .map(({ at }, i) => ({
      id: `call-${String(i)}`,
      at,
      valueAtRiskCents: 30_000,
      nextSaveByAt: 1_800_000_000_000 + i * 60_000,
    }));
  const worker = createPocketsWorker(path.resolve('dist/server/pockets-worker.js'));
  const ms: number[] = [];
  let found = 0;
  for (let i = 0; i <= ROUNDS; i++) {
    const began = performance.now();
    const { pockets } = await worker.run({ calls, options: { epsKm: 0.5, minPoints: 4 } });
    // The first round also warms the thread.
    if (i > 0) ms.push(performance.now() - began);
    found = pockets.length;
  }
  await worker.close();
  process.stdout.write(JSON.stringify({ points: calls.length, pockets: found, ms: spread(ms) }));
}

void main();
