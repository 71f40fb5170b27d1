import { randomUUID } from 'node:crypto';
import { mkdir, writeFile } from 'node:fs/promises';
import path from 'node:path';
import type { Role } from '@shared/contract/common';
import type { Context } from '../context';
import { hashPassword, makePassphrase } from '../staff/passwords';
import { UserRecord } from '../staff/user-record';
import { StormRecord } from '../storms/storm-record';
import { TechnicianRecord } from '../technicians/technician-record';

interface SignIn {
  readonly role: Role;
  readonly name: string;
  readonly email: string;
  readonly password: string;
}

const PEOPLE: readonly { role: Role; name: string; email: string }[] = [
  { role: 'dispatcher', name: 'Mara Quill', email: 'mara@example.com' },
  { role: 'dispatcher', name: 'Jonas Fenwick', email: 'jonas@example.com' },
  { role: 'technician', name: 'Theo Larkspur', email: 'theo@example.com' },
  { role: 'manager', name: 'Ines Calloway', email: 'ines@example.com' },
  { role: 'owner', name: 'Ruth Oakhaven', email: 'ruth@example.com' },
];

/**
 * Fills an empty database with the demo's people and an open storm. The passphrases are made here
 * and written beside the data, readable by its owner alone; the next start finds them there.
 */
export async function seedDemo(context: Context): Promise<void> {
  if ((await UserRecord.count()) > 0) return;
  const [lon, lat] = context.region.dto.centre;
  const signIns: SignIn[] = [];
  for (const person of PEOPLE) {
    const password = makePassphrase();
    const technician =
      person.role === 'technician'
        ? await TechnicianRecord.create({
            id: randomUUID(),
            name: person.name,
            phone: '+12525550111',
            skills: ['electrical', 'sealed-system'],
            van: { 'start-relay': 4, overload: 4 },
            startLon: lon,
            startLat: lat,
          })
        : null;
    await UserRecord.create({
      id: randomUUID(),
      name: person.name,
      signInName: person.email,
      role: person.role,
      technicianId: technician?.id ?? null,
      passwordHash: await hashPassword(password),
    });
    signIns.push({ ...person, password });
  }
  await StormRecord.create({
    id: randomUUID(),
    name: 'Demo storm',
    openedAt: new Date(context.clock()),
  });
  await mkdir(context.config.dataFolder, { recursive: true });
  await writeFile(
    path.join(context.config.dataFolder, 'demo-sign-ins.json'),
    JSON.stringify(signIns, null, 2),
    { mode: 0o600 },
  );
}
