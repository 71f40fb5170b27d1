import path from 'node:path';
import { randomUUID } from 'node:crypto';
import { HOUR_MS } from '@shared/domain/instant';
import type { NightLogDto, NightLogPreview } from '@shared/contract/night-logs';
import { createLogReader } from '../../server/night-log/log-reader';
import { makeNightLog } from '../../server/night-log/make-night-log';
import { ensureDemoRegion } from '../../server/region/demo-region';
import { openRegion } from '../../server/region/open-region';
import { readAddressBook } from '../../server/region/region-data';
import { startServer } from '../support/server';

const ROWS = 5000;

/** Reads and imports a log of 5,000 rows through the API, on the demo county's addresses. */
async function main(): Promise<void> {
  const imported = await ensureDemoRegion(path.resolve('tiles'));
  const region = await openRegion(imported);
  const { addresses } = await readAddressBook(imported.folder);
  const logReader = createLogReader(path.resolve('dist/server/import-worker.js'));
  const server = await startServer({ context: { region, logReader } });
  const from = server.now();
  server.setNow(from + 12 * HOUR_MS);
  const mara = await server.signIn('dispatcher');

  const { bytes } = makeNightLog({
    seed: 7,
    rows: ROWS,
    addresses: addresses
      .filter((_, i) => i % Math.floor(addresses.length / ROWS) === 0)
      .map(({ number, street, city, postcode, at }) => ({
        number,
        street,
        city,
        postcode,
        lon: at[0],
        lat: at[1],
      })),
    night: { fromAt: from, toAt: from + 9 * HOUR_MS },
    zone: region.dto.timeZone,
  });

  let began = performance.now();
  const sent = await mara.call('uploadNightLog', {
    params: { stormId: server.stormId },
    query: { fileName: 'night.csv' },
    bytes: Buffer.from(bytes),
  });
  const previewSeconds = (performance.now() - began) / 1000;
  const { log } = sent.body as NightLogPreview;

  let longestGapMs = 0;
  let last = performance.now();
  const watch = setInterval(() => {
    longestGapMs = Math.max(longestGapMs, performance.now() - last - 20);
    last = performance.now();
  }, 20);
  began = performance.now();
  await mara.call('importNightLog', {
    params: { logId: log.id },
    body: { commandId: randomUUID(), columns: log.columns.map(({ role }) => role) },
  });
  let done: NightLogDto;
  do {
    await new Promise((resolve) => setTimeout(resolve, 250));
    done = (await mara.call('readNightLog', { params: { logId: log.id } })).body as NightLogDto;
  } while (done.state === 'importing');
  const importSeconds = (performance.now() - began) / 1000;
  clearInterval(watch);

  process.stdout.write(
    JSON.stringify({
      rows: done.rowCount,
      counts: done.counts,
      state: done.state,
      previewSeconds: Number(previewSeconds.toFixed(2)),
      importSeconds: Number(importSeconds.toFixed(2)),
      wantedSeconds: 20,
      longestEventLoopGapMs: Math.round(longestGapMs),
    }),
  );
  await server.close();
  await logReader.close();
}

void main();
