import { randomUUID } from 'node:crypto';
import type { Address } from '@shared/contract/calls';
import type { Job } from '../commands/run-command';
import { HouseholdRecord } from './household-record';

/** Remembers who answers at a phone number, as last told. */
export async function keepHousehold(
  job: Job,
  phone: string,
  told: {
    readonly name: string;
    readonly address: Address;
    readonly language: 'en' | 'es';
    readonly mayText: boolean;
  },
): Promise<HouseholdRecord> {
  const facts = {
    phone,
    name: told.name,
    addressText: told.address.text,
    unitNo: told.address.unitNo,
    lon: told.address.lonLat?.[0] ?? null,
    lat: told.address.lonLat?.[1] ?? null,
    addressKind: told.address.kind,
    language: told.language,
    mayText: told.mayText,
  };
  const known = await HouseholdRecord.findOne({
    where: { phone },
    transaction: job.tx,
    lock: job.tx.LOCK.UPDATE,
  });
  if (!known)
    return HouseholdRecord.create({ id: randomUUID(), ...facts }, { transaction: job.tx });
  known.set(facts);
  return known.save({ transaction: job.tx });
}
