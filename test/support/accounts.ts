import { randomUUID } from 'node:crypto';
import type { Sequelize } from 'sequelize';
import request from 'supertest';
import type { Role } from '@shared/contract/common';
import { insert, select } from '../../server/db/sql';
import { hashPassword } from '../../server/staff/passwords';
import { UserRecord } from '../../server/staff/user-record';
import { TechnicianRecord } from '../../server/technicians/technician-record';
import { TEST_REGION } from './region';

export const PASSWORD = 'a heron on the sandbar';
const PLACE: readonly [number, number] = TEST_REGION.dto.centre;

export interface Account {
  readonly userId: string;
  readonly technicianId: string | null;
  readonly cookies: string;
}

interface KnownAccount extends Account {
  readonly role: Role;
  readonly name: string;
  readonly signInName: string;
  readonly session: SessionRow;
}

interface SessionRow {
  readonly sid: string;
  readonly expires: Date;
  readonly data: string;
}

/**
 * The people of one server under test. Whoever has come in by the door once is let in again, after the
 * tables were emptied, by the same rows of user and session: checking a password is slow on purpose, and
 * most tests only need somebody who is there. The door itself is the part of sign-in.spec.
 */
export class Accounts {
  private readonly known: KnownAccount[] = [];
  private readonly present = new Set<KnownAccount>();

  constructor(
    private readonly sequelize: Sequelize,
    private readonly url: string,
    private readonly origin: string,
  ) {}

  /** The tables were emptied: nobody is there any more. */
  forgetPresent(): void {
    this.present.clear();
  }

  /** Somebody with a session of their own; each call gives another person. */
  async signIn(role: Role, name: string): Promise<Account> {
    let account = this.known.find(
      (one) => one.role === role && one.name === name && !this.present.has(one),
    );
    if (account) await this.putBack(account);
    else this.known.push((account = await this.enter(role, name)));
    this.present.add(account);
    return account;
  }

  private async enter(role: Role, name: string): Promise<KnownAccount> {
    const userId = randomUUID();
    const person = {
      userId,
      technicianId: role === 'technician' ? randomUUID() : null,
      role,
      name,
      signInName: `${name.toLowerCase().replace(/\W+/g, '.')}.${userId.slice(0, 4)}@example.com`,
    };
    await addRows(person);
    const entered = await request(this.url)
      .post('/api/session')
      .set('Origin', this.origin)
      .send({ signInName: person.signInName, password: PASSWORD });
    if (entered.status !== 200) throw new Error(`sign-in failed: ${entered.text}`);
    const set = entered.get('Set-Cookie') ?? [];
    const cookies = set.map((cookie) => cookie.split(';')[0]).join('; ');
    // A signed cookie reads "s:", the session's id, a dot and the signature.
    const sid = /=s%3A([^.;]+)\./.exec(cookies)?.[1];
    const [session] = await select<SessionRow>(
      this.sequelize,
      'SELECT sid, expires, data FROM sessions WHERE sid = ?',
      [sid],
    );
    if (!session) throw new Error(`the session of ${name} is not to be found`);
    return { ...person, cookies, session };
  }

  private async putBack(account: KnownAccount): Promise<void> {
    await addRows(account);
    const { sid, expires, data } = account.session;
    await insert(
      this.sequelize,
      'INSERT INTO sessions (sid, expires, data, created_at, updated_at) VALUES (?, ?, ?, NOW(3), NOW(3))',
      [sid, expires, data],
    );
  }
}

async function addRows(
  person: Pick<KnownAccount, 'userId' | 'technicianId' | 'role' | 'name' | 'signInName'>,
): Promise<void> {
  const { userId, technicianId, role, name, signInName } = person;
  if (technicianId)
    await TechnicianRecord.create({
      id: technicianId,
      name,
      phone: '+12525550120',
      skills: ['electrical', 'sealed-system', 'commercial'],
      van: {},
      startLon: PLACE[0],
      startLat: PLACE[1],
    });
  await UserRecord.create({
    id: userId,
    name,
    signInName,
    role,
    technicianId,
    passwordHash: await sharedHash(),
  });
}

let hashed: Promise<string> | undefined;
/** Hashing is slow on purpose; once is enough for all accounts of a test run. */
const sharedHash = (): Promise<string> => (hashed ??= hashPassword(PASSWORD));
