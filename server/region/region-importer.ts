import { fork, type ChildProcess } from 'node:child_process';
import os from 'node:os';
import type { RegionImport } from './import-region';
import type { ImportStep } from './region-making';
import { UnreadableRegion } from './unreadable-region';

/** An import as the other process is told of it. */
export type ImportTask = Omit<RegionImport, 'pbf' | 'onProgress'> & { readonly pbf: string };

/** What the importing process says. */
export type ImportNews =
  | { readonly kind: 'progress'; readonly step: ImportStep }
  | { readonly kind: 'done'; readonly key: string }
  | { readonly kind: 'refused'; readonly words: string }
  | { readonly kind: 'failed'; readonly error: string };

export interface RunningImport {
  /** The key of the finished region. @throws UnreadableRegion, ImportCancelled, or an error of ours */
  readonly key: Promise<string>;
  cancel(): void;
}

/** What the server sees of the importer. */
export interface RegionImporterPort {
  start(task: ImportTask, onProgress: (step: ImportStep) => void): RunningImport;
}

export class ImportCancelled extends Error {
  override readonly name = 'ImportCancelled';
}

/** Boards come first: an import gets what they leave of the processor. */
const LOW_PRIORITY = 10;
/** A county needs half of this; more would take the machine from the boards. */
const MOST_HEAP_MB = 1_400;

/**
 * Imports in a process of its own, which gives its memory back when it ends, and whose end, whatever
 * its cause, ends nothing else.
 *
 * @param onStart is told of each process
 */
export function createRegionImporter(
  scriptPath: string,
  onStart: (child: ChildProcess) => void = () => undefined,
): RegionImporterPort {
  return {
    start: (task, onProgress) => {
      const child = fork(scriptPath, [], {
        execArgv: [`--max-old-space-size=${String(MOST_HEAP_MB)}`],
        stdio: ['ignore', 'ignore', 'pipe', 'ipc'],
      });
      lowerPriority(child);
      onStart(child);
      let isCancelled = false;
      const key = outcomeOf(child, onProgress).catch((error: unknown) => {
        throw isCancelled ? new ImportCancelled('cancelled') : error;
      });
      child.send(task);
      return {
        key,
        cancel: () => {
          isCancelled = true;
          child.kill('SIGKILL');
        },
      };
    },
  };
}

function lowerPriority(child: ChildProcess): void {
  if (child.pid === undefined) return;
  try {
    os.setPriority(child.pid, LOW_PRIORITY);
  } catch {
    // It has ended already, or the system does not allow it: then it runs like any other.
  }
}

function outcomeOf(child: ChildProcess, onProgress: (step: ImportStep) => void): Promise<string> {
  return new Promise((resolve, reject) => {
    let complaint = '';
    child.stderr?.on('data', (chunk: Buffer) => {
      complaint = `${complaint}${chunk.toString('utf8')}`.slice(-2_000);
    });
    child.on('message', (sent) => {
      const news = sent as ImportNews;
      if (news.kind === 'progress') onProgress(news.step);
      else if (news.kind === 'done') resolve(news.key);
      else if (news.kind === 'refused') reject(new UnreadableRegion(news.words));
      else reject(new Error(news.error));
    });
    child.once('error', reject);
    child.once('exit', (code, signal) => {
      // After an answer this changes nothing.
      if (/heap out of memory/i.test(complaint) || signal === 'SIGABRT')
        reject(
          new UnreadableRegion(
            'The extract is too large for the memory that an import may use. Cut it down to the counties that you serve, for example with: osmium extract --bbox W,S,E,N in.osm.pbf -o out.osm.pbf',
          ),
        );
      else if (signal)
        reject(
          new UnreadableRegion(
            `The import was ended from outside (${signal}), perhaps since the machine ran out of memory. The region in use is untouched. Try again; if it happens again, cut the extract down.`,
          ),
        );
      else reject(new Error(`the importer ended with ${String(code)}: ${complaint}`));
    });
  });
}
