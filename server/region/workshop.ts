import { randomUUID } from 'node:crypto';
import { mkdir, readdir, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import { hostname } from 'node:os';
import { join } from 'node:path';
import { readManifest } from './region-data';

/** A folder whose name begins so is no region; only who makes it may use it. */
const WORKSHOP = '.making-';
const MAKER_FILE = 'maker.json';

/** An import takes minutes. After this long its maker is gone, whatever its number says. */
const LONGEST_IMPORT_MS = 12 * 3_600_000;
/** Between the making of a folder and of the file that says whose it is. */
const NAMELESS_MS = 60_000;

interface Maker {
  readonly pid: number;
  readonly host: string;
}

/** Makes a folder to work in, which takes its final name when all is complete. */
export async function openWorkshop(outFolder: string): Promise<string> {
  const folder = join(outFolder, `${WORKSHOP}${randomUUID()}`);
  await mkdir(folder, { recursive: true });
  const maker: Maker = { pid: process.pid, host: hostname() };
  await writeFile(join(folder, MAKER_FILE), JSON.stringify(maker));
  return folder;
}

/** Gives the finished folder its name; when another import was quicker, its folder stays. */
export async function settleWorkshop(workshop: string, folder: string): Promise<void> {
  await rm(join(workshop, MAKER_FILE), { force: true });
  try {
    await rename(workshop, folder);
  } catch (error) {
    if (!(await readManifest(folder))) throw error;
    await rm(workshop, { recursive: true, force: true });
  }
}

/** Removes what imports that were killed have left behind. @returns how many folders went */
export async function dropAbandoned(outFolder: string): Promise<number> {
  // A folder that does not exist yet holds nothing.
  const entries = await readdir(outFolder).catch(() => []);
  let gone = 0;
  for (const entry of entries) {
    if (!entry.startsWith(WORKSHOP)) continue;
    const folder = join(outFolder, entry);
    if (!(await isAbandoned(folder))) continue;
    await rm(folder, { recursive: true, force: true });
    gone++;
  }
  return gone;
}

async function isAbandoned(folder: string): Promise<boolean> {
  // It may be gone by now: then another process has dropped or finished it.
  const found = await stat(folder).catch(() => null);
  if (!found) return false;
  const age = Date.now() - found.birthtimeMs;
  if (age > LONGEST_IMPORT_MS) return true;
  const text = await readFile(join(folder, MAKER_FILE), 'utf8').catch(() => null);
  if (text === null) return age > NAMELESS_MS;
  const maker = readMaker(text);
  if (!maker) return age > NAMELESS_MS;
  // The numbers of another machine's processes mean nothing here.
  return maker.host === hostname() && !isAlive(maker.pid);
}

function readMaker(text: string): Maker | null {
  try {
    return JSON.parse(text) as Maker;
  } catch {
    // Cut off while it was written.
    return null;
  }
}

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    // EPERM: there is such a process, of another user.
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}
