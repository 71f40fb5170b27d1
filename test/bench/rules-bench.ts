import path from 'node:path';
import type { CompartmentFacts } from '@shared/domain/cold-unit';
import { HOUR_MS, MINUTE_MS } from '@shared/domain/instant';
import { SeededRandom } from '@shared/domain/planner/random';
import { pockets } from '@shared/domain/pockets/pockets';
import { thawClock } from '@shared/domain/thaw/thaw-clock';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { unknownCompartment } from '@shared/domain/unknown-compartment';
import { byUrgency, urgency } from '@shared/domain/urgency';
import { ensureDemoRegion } from '../../server/region/demo-region';
import { holdOrder } from '../../src/app/board/held-order';
import { DEFAULT_WEIGHING, Ranking } from '../../src/app/core/ranking';
import { aCallRow, NOW } from '../../src/app/core/testing';
import { spread } from './quantiles';

const CALLS = 3_000;
const BLOB = 5_000;
const ROUNDS = 20;

/**
 * What single rules cost at the size of a great storm, in this thread: the queue's order, what it
 * holds back under a reader, urgency, pockets where all calls lie on one heap, and finding the
 * region that is already there.
 */
async function main(): Promise<void> {
  process.stdout.write(
    JSON.stringify({
      calls: CALLS,
      urgencyMs: urgencyTimes(),
      rankingMs: rankingTimes(),
      heldOrderMs: heldOrderTimes(),
      pocketsOfOneBlob: { points: BLOB, ms: blobTimes() },
      regionFoundMs: await regionTimes(),
    }),
  );
}

function urgencyTimes() {
  const loss = { lostAt: NOW - 3 * HOUR_MS, restoredAt: null };
  const calls = Array.from({ length: CALLS }, (_, i) =>
    [food('fresh-food', i), food('freezer', i)].map((facts) => ({
      facts,
      clock: thawClock(facts, loss),
    })),
  );
  return times(() => calls.map((call) => urgency(call, loss, NOW)).sort(byUrgency));
}

const food = (kind: 'fresh-food' | 'freezer', valueCents: number): CompartmentFacts => ({
  ...unknownCompartment('fridge-freezer', kind, 'label-not-read'),
  fill: 1,
  door: 'shut',
  roomF: 72,
  valueCents,
});

/** The whole queue anew, as at each full minute. */
function rankingTimes() {
  const calls = Array.from({ length: CALLS }, (_, i) => aCallRow(((i * 7919) % CALLS) + 1));
  return times((round) => new Ranking().rank(calls, NOW + round * MINUTE_MS, DEFAULT_WEIGHING));
}

/** The worst there is: every row has moved. */
function heldOrderTimes() {
  const shown = Array.from({ length: CALLS }, (_, i) => `call-${String(i)}`);
  const live = [...shown].reverse();
  return times(() => holdOrder(shown, live));
}

function blobTimes() {
  const random = new SeededRandom(1);
  const blob = Array.from({ length: BLOB }, (): LonLat => [
    -38 + random.unit() / 300,
    31 + random.unit() / 300,
  ]);
  return times(() => pockets(blob, { epsKm: 0.8, minPoints: 4 }));
}

async function regionTimes() {
  const folder = path.resolve('tiles');
  await ensureDemoRegion(folder);
  const ms: number[] = [];
  for (let round = 0; round < ROUNDS; round++) {
    const began = performance.now();
    await ensureDemoRegion(folder);
    ms.push(performance.now() - began);
  }
  return spread(ms);
}

/** The first rounds also warm the compiler and are left out. */
function times(work: (round: number) => unknown) {
  const ms: number[] = [];
  for (let round = -3; round < ROUNDS; round++) {
    const began = performance.now();
    work(round);
    if (round >= 0) ms.push(performance.now() - began);
  }
  return spread(ms);
}

void main();
