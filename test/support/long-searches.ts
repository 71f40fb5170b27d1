import { execFile } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import path from 'node:path';
import { promisify } from 'node:util';
import { bundleProgram } from './bundle-program';

export type LongSearch =
  | { readonly kind: 'gaps-to-exact'; readonly problems: number; readonly iterations: number }
  | { readonly kind: 'solomon'; readonly names: readonly string[]; readonly iterations: number };

export interface SolomonFigures {
  readonly name: string;
  readonly violations: readonly string[];
  readonly unassigned: number;
  readonly lateness: number;
  readonly travel: number;
}

/**
 * Searches in a program of their own. Within jest each look at a global name goes through its sandbox,
 * which makes a search of thousands of rounds ten times as slow as the product's.
 */
export async function longSearch(
  asked: Extract<LongSearch, { kind: 'gaps-to-exact' }>,
): Promise<number[]>;
export async function longSearch(
  asked: Extract<LongSearch, { kind: 'solomon' }>,
): Promise<SolomonFigures[]>;
export async function longSearch(asked: LongSearch): Promise<unknown> {
  const root = path.resolve(__dirname, '../..');
  const folder = await mkdtemp(path.join(root, '.data', 'long-searches-'));
  try {
    const program = path.join(folder, 'program.cjs');
    await bundleProgram('test/support/long-searches-program.ts', program);
    const { stdout } = await promisify(execFile)(
      process.execPath,
      [program, JSON.stringify(asked)],
      { maxBuffer: 64 * 1024 * 1024 },
    );
    return JSON.parse(stdout);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}
