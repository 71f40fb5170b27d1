import { readFile } from 'node:fs/promises';
import path from 'node:path';
import type { Me } from '@shared/contract/office';
import type { Role } from '@shared/contract/common';
import { PersonAtWork } from './person-at-work';

/** The drill cannot be played; the words say why and what to do. */
export class NoDrill extends Error {
  constructor(
    readonly exitCode: number,
    words: string,
  ) {
    super(words);
  }
}

export const EXIT_NO_SERVER = 2;
export const EXIT_NOT_ALLOWED = 3;

export interface SignInNote {
  readonly role: Role;
  readonly name: string;
  readonly email: string;
  readonly password: string;
}

export interface FoundServer {
  readonly address: string;
  readonly signIns: readonly SignInNote[];
}

/** The server that `npm start` runs from this folder, and the sign-ins of its invented people. */
export async function findServer(
  dataFolder: string,
  asked: { readonly address?: string; readonly signIns?: string },
): Promise<FoundServer> {
  const address = asked.address ?? (await runningAddress(dataFolder));
  const file = asked.signIns ?? path.join(dataFolder, 'demo-sign-ins.json');
  const signIns = (await readJson(file)) as readonly SignInNote[] | null;
  if (!Array.isArray(signIns) || signIns.length === 0) {
    throw new NoDrill(
      EXIT_NOT_ALLOWED,
      `There are no demo sign-ins in ${file}: this is no demo. Name another file with --sign-ins.`,
    );
  }
  return { address, signIns: signIns as readonly SignInNote[] };
}

async function runningAddress(dataFolder: string): Promise<string> {
  const running = (await readJson(path.join(dataFolder, 'running.json'))) as {
    address?: string;
  } | null;
  if (running?.address) return running.address;
  throw new NoDrill(
    EXIT_NO_SERVER,
    'No server runs from this folder. Start it with npm start, or name one with --address.',
  );
}

async function readJson(file: string): Promise<unknown> {
  try {
    return JSON.parse(await readFile(file, 'utf8')) as unknown;
  } catch {
    return null;
  }
}

/** Signs somebody in of whom the sign-ins tell. */
export async function signIn(
  { address }: FoundServer,
  note: SignInNote,
): Promise<{ readonly person: PersonAtWork; readonly me: Me }> {
  const person = new PersonAtWork(note.name, address);
  try {
    return { person, me: await person.signIn(note.email, note.password) };
  } catch (error) {
    if (error instanceof TypeError) {
      throw new NoDrill(EXIT_NO_SERVER, `No server answers at ${address}.`);
    }
    throw error;
  }
}

/** The storm to play into. A company's real storm is refused unless the caller insists. */
export function stormOf(me: Me, isInsisted: boolean): string {
  if (!me.storm) {
    throw new NoDrill(EXIT_NOT_ALLOWED, 'No storm is open. Open one first (Office > Storms).');
  }
  if (!me.isDemo && !isInsisted) {
    throw new NoDrill(
      EXIT_NOT_ALLOWED,
      `The server is no demo, and "${me.storm.name}" may be a real storm. A drill would put invented calls into it; --yes-into-this-storm does so all the same.`,
    );
  }
  return me.storm.id;
}
