import { mkdtemp, rm, stat } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import { AddressIndex } from '../../server/region/address-index';
import { nearAreas } from '../../server/region/nearness';
import { writeAddressBook } from '../../server/region/region-data';
import { disturbedAddresses } from '../support/disturbed-addresses';
import { madeAddressBook } from '../support/made-address-book';
import { quantile } from './quantiles';

const SIZES = [
  { addresses: 125_000, wantedP95: 10 },
  { addresses: 1_000_000, wantedP95: 30 },
];
const QUESTIONS = 1_000;
const TYPED = 60;
/** Questions before any is measured: a server in use has long compiled what it runs. */
const WARM_UP = 300;

setFlagsFromString('--expose-gc');
const collectGarbage = runInNewContext('gc') as () => void;
const megabytes = (bytes: number): number => Math.round(bytes / 1e5) / 10;
const seconds = (since: number): number => Math.round(performance.now() - since) / 1000;

/** Suggestions over made-up address books of two sizes: whole addresses, and each key of some of them. */
async function main(): Promise<void> {
  const figures = [];
  for (const size of SIZES) figures.push(await measure(size));
  process.stdout.write(JSON.stringify({ sizes: figures }));
}

async function measure({ addresses, wantedP95 }: (typeof SIZES)[number]) {
  const folder = await mkdtemp(path.join(tmpdir(), 'thawline-addresses-'));
  try {
    const { questions, packSeconds } = await prepare(folder, addresses);
    collectGarbage();
    const before = process.memoryUsage();
    const opened = performance.now();
    const index = await AddressIndex.open(folder);
    const openSeconds = seconds(opened);
    collectGarbage();
    const after = process.memoryUsage();
    const near = nearAreas(someAreas());
    for (const text of questions.slice(0, WARM_UP)) index.suggest(text, { near });
    const whole = questions.map((text) => milliseconds(() => index.suggest(text, { near })));
    const keys = questions
      .slice(0, TYPED)
      .flatMap((text) => [...text].map((_, i) => text.slice(0, i + 1)))
      .filter((text) => text.trim().length >= 3)
      .map((text) => milliseconds(() => index.suggest(text, { near })));
    const pinBegan = performance.now();
    index.nearest(-47.8, 36.15);
    return {
      addresses,
      wantedP95,
      whole: spread(whole),
      eachKey: spread(keys),
      packSeconds,
      openSeconds,
      firstPinSeconds: seconds(pinBegan),
      laterPinMs: quantile(
        questions.map((_, i) => milliseconds(() => index.nearest(-47.9 + i * 0.0004, 36.11)).wall),
        0.95,
      ),
      fileMegabytes: megabytes((await stat(path.join(folder, 'addresses.bin'))).size),
      heapMegabytes: megabytes(after.heapUsed - before.heapUsed),
      bufferMegabytes: megabytes(after.arrayBuffers - before.arrayBuffers),
    };
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

/** In a function of its own, so that the book may be forgotten before anything is measured. */
async function prepare(folder: string, count: number) {
  const book = madeAddressBook({ seed: 3, count });
  const { clear } = disturbedAddresses(book, { seed: 5, count: QUESTIONS });
  const began = performance.now();
  await writeAddressBook(folder, book);
  return { questions: clear.map(({ text }) => text), packSeconds: seconds(began) };
}

/** Sixty squares, as many as a county has feeders. */
function someAreas(): [number, number][][][][] {
  return Array.from({ length: 60 }, (_, i) => {
    const [west, south] = [-47.9 + (i % 10) * 0.04, 36.1 + Math.floor(i / 10) * 0.05];
    return [
      [
        [
          [west, south],
          [west + 0.02, south],
          [west + 0.02, south + 0.02],
          [west, south + 0.02],
          [west, south],
        ],
      ],
    ] as [number, number][][][];
  });
}

interface Cost {
  readonly wall: number;
  /** Of all threads of this process: what remains of the time when the machine is busy elsewhere. */
  readonly cpu: number;
}

function milliseconds(work: () => unknown): Cost {
  const before = process.cpuUsage();
  const began = performance.now();
  work();
  const wall = performance.now() - began;
  const { user, system } = process.cpuUsage(before);
  return { wall, cpu: (user + system) / 1000 };
}

const spread = (costs: readonly Cost[]) => {
  const walls = costs.map(({ wall }) => wall);
  return {
    n: costs.length,
    p50: quantile(walls, 0.5),
    p95: quantile(walls, 0.95),
    p99: quantile(walls, 0.99),
    most: quantile(walls, 1),
    cpuP95: quantile(
      costs.map(({ cpu }) => cpu),
      0.95,
    ),
  };
};

void main();
