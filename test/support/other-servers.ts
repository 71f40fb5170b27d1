import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdirSync, rmSync } from 'node:fs';
import path from 'node:path';
import type { Instant } from '@shared/domain/instant';
import { bundleProgram } from './bundle-program';
import { testDatabase } from './database';

const ROOT = path.resolve(__dirname, '../..');
const START_WITHIN_MS = 30_000;

export interface OtherServer {
  readonly url: string;
  readonly process: ChildProcess;
  /** Whether it still runs: a failure that nobody handled would have ended it. */
  isAlive(): boolean;
  kill(): Promise<void>;
}

/** Servers in processes of their own, on the database of the test. */
export interface OtherServers {
  start(told: {
    readonly now: Instant;
    readonly dieAfter?: number;
    /** Hides what the database library says of each connection that it lost. */
    readonly isQuiet?: true;
  }): Promise<OtherServer>;
  /** Kills what still runs and clears up. */
  close(): Promise<void>;
}

export async function otherServers(): Promise<OtherServers> {
  // Inside the repository, so that the bundle finds its packages.
  const folder = path.join(ROOT, '.data', `server-program-${String(process.pid)}`);
  const program = path.join(folder, 'server-program.cjs');
  mkdirSync(folder, { recursive: true });
  await bundleProgram('test/support/server-program.ts', program);
  const running = new Set<OtherServer>();

  return {
    start: async ({ now, dieAfter = null, isQuiet = false }) => {
      const child = spawn(process.execPath, [program], {
        stdio: ['ignore', 'pipe', isQuiet ? 'ignore' : 'inherit'],
        env: {
          ...process.env,
          SERVER_PROGRAM: JSON.stringify({ database: testDatabase(), now, dieAfter }),
        },
      });
      const gone = once(child, 'exit');
      const server: OtherServer = {
        url: `http://127.0.0.1:${await portOf(child)}`,
        process: child,
        isAlive: () => child.exitCode === null && child.signalCode === null,
        kill: async () => {
          child.kill('SIGKILL');
          await gone;
          running.delete(server);
        },
      };
      running.add(server);
      return server;
    },
    close: async () => {
      await Promise.all([...running].map((server) => server.kill()));
      rmSync(folder, { recursive: true, force: true });
    },
  };
}

function portOf(child: ChildProcess): Promise<string> {
  return new Promise((resolve, reject) => {
    const overdue = setTimeout(() => {
      child.kill('SIGKILL');
      reject(new Error('the server did not start'));
    }, START_WITHIN_MS);
    let said = '';
    child.stdout?.on('data', (chunk: Buffer) => {
      said += chunk.toString('utf8');
      const port = /listening (\d+)\n/.exec(said)?.[1];
      if (port === undefined) return;
      clearTimeout(overdue);
      resolve(port);
    });
    child.once('exit', () => {
      clearTimeout(overdue);
      reject(new Error('the server ended before it listened'));
    });
  });
}
