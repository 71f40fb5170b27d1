import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { build, stop } from 'esbuild';
import { createPlannerWorker, type PlannerWorker } from '../../server/workers/planner-client';

/** The planner as the server runs it: bundled, in a thread of its own. */
export async function startPlanner(): Promise<{ planner: PlannerWorker; close(): Promise<void> }> {
  const root = path.resolve(__dirname, '../..');
  const folder = mkdtempSync(path.join(tmpdir(), 'thawline-planner-'));
  await build({
    absWorkingDir: root,
    entryPoints: ['server/workers/planner-worker.ts'],
    entryNames: '[name]',
    outdir: folder,
    bundle: true,
    platform: 'node',
    format: 'cjs',
    target: 'node20',
    tsconfig: 'tsconfig.json',
    logLevel: 'error',
  });
  await stop();
  const planner = createPlannerWorker(path.join(folder, 'planner-worker.js'));
  return {
    planner,
    close: async () => {
      await planner.close();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}
