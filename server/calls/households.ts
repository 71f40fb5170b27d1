import { randomUUID } from 'node:crypto';
import type { Address } from '@shared/contract/calls';
import type { Job } from '../commands/run-command';
import { insert, select } from '../db/sql';

export interface HouseholdTold {
  readonly phone: string;
  readonly name: string;
  readonly address: Address;
  readonly language: 'en' | 'es';
  readonly mayText: boolean;
}

/**
 * Remembers who answers at each phone number. What was told on the phone replaces what was known;
 * what a night log says only fills a blank.
 *
 * @returns the household's id by its phone number
 */
export async function keepHouseholds(
  job: Job,
  told: readonly HouseholdTold[],
  source: 'person' | 'log',
): Promise<Map<string, string>> {
  if (told.length === 0) return new Map();
  const replaced = source === 'person' ? REPLACE : 'phone = VALUES(phone)';
  // One statement, so that two who ring at the same moment cannot both be new.
  await insert(
    job.sequelize,
    `INSERT INTO households
       (id, phone, name, address_text, unit_no, lon, lat, address_kind, language, may_text)
     VALUES ? ON DUPLICATE KEY UPDATE ${replaced}`,
    [
      told.map(({ phone, name, address, language, mayText }) => [
        randomUUID(),
        phone,
        name,
        address.text,
        address.unitNo,
        address.lonLat?.[0] ?? null,
        address.lonLat?.[1] ?? null,
        address.kind,
        language,
        mayText,
      ]),
    ],
    job.tx,
  );
  const rows = await select<{ id: string; phone: string }>(
    job.sequelize,
    'SELECT id, phone FROM households WHERE phone IN (?)',
    [told.map(({ phone }) => phone)],
    job.tx,
  );
  return new Map(rows.map(({ id, phone }) => [phone, id]));
}

const REPLACE = [
  'name',
  'address_text',
  'unit_no',
  'lon',
  'lat',
  'address_kind',
  'language',
  'may_text',
]
  .map((column) => `${column} = VALUES(${column})`)
  .join(', ');
