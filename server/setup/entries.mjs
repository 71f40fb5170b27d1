import { existsSync } from 'node:fs';
import path from 'node:path';

import { root } from './paths.mjs';

/** Each program of the server; each becomes dist/server/<name>.js. */
const ENTRIES = [
  'server/main.ts',
  'server/workers/planner-worker.ts',
  'server/workers/pockets-worker.ts',
  'server/workers/forecast-worker.ts',
  'server/workers/roads-worker.ts',
  'server/night-log/import-worker.ts',
  'server/drill-program/drill-cli.ts',
  'server/plan-program/plan-cli.ts',
  'server/simulate-program/simulate-cli.ts',
  'server/region/region-cli.ts',
  'server/region/import-program.ts',
  'server/db/migrate-cli.ts',
  'server/check-invariants.ts',
  'server/fakes/fakes-main.ts',
];

/** Those that exist. */
export const serverEntries = () => ENTRIES.filter((entry) => existsSync(path.join(root, entry)));
