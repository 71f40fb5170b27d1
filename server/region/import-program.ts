import { basename } from 'node:path';
import { inWords } from './disk-trouble';
import { importRegion } from './import-region';
import type { ImportNews, ImportTask } from './region-importer';
import { UnreadableRegion } from './unreadable-region';

/** Progress is told no more often than this, in milliseconds. */
const TELL_EVERY_MS = 200;

/** Imports one region for the server that started this process, tells how it went, and ends. */
function main(): void {
  // The server is gone: nobody waits for this any more. What was made is cleared away at its next start.
  process.once('disconnect', () => process.exit(1));
  process.once('message', (task) => void work(task as ImportTask));
}

async function work(task: ImportTask): Promise<void> {
  let told = 0;
  try {
    const { folder } = await importRegion({
      ...task,
      onProgress: (step) => {
        const now = performance.now();
        if (now - told < TELL_EVERY_MS && step.step !== 'done') return;
        told = now;
        say({ kind: 'progress', step });
      },
    });
    last({ kind: 'done', key: basename(folder) });
  } catch (thrown) {
    const error = inWords(thrown);
    last(
      error instanceof UnreadableRegion
        ? { kind: 'refused', words: error.message }
        : {
            kind: 'failed',
            error: error instanceof Error ? (error.stack ?? error.message) : String(error),
          },
    );
  }
}

const say = (news: ImportNews): void => void process.send?.(news);
const last = (news: ImportNews): void =>
  void process.send?.(news, undefined, undefined, () => process.exit(0));

main();
