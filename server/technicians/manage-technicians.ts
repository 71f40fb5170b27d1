import { randomUUID } from 'node:crypto';
import type { z } from 'zod';
import type { AddTechnician, ChangeTechnician, TechnicianDto } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import { breaksFault } from '@shared/domain/shift-breaks';
import type { Job } from '../commands/run-command';
import { isDuplicateOf } from '../db/sql';
import { clearRoute, settleRouteOf } from '../routes/clear-route';
import { openStorm } from '../storms/storm-queries';
import { lockTechnicians } from './lock-technicians';
import { ShiftRecord, TechnicianRecord } from './technician-record';
import { technicianDtos } from './technician-rows';

/** @throws Refusal `already-used`, or `times-disagree` for shifts that cannot be */
export async function addTechnician(
  job: Job,
  told: z.output<typeof AddTechnician>,
): Promise<TechnicianDto> {
  try {
    await TechnicianRecord.create(
      {
        id: told.technicianId,
        name: told.name,
        phone: told.phone,
        skills: told.skills,
        van: told.van,
        startLon: told.start[0],
        startLat: told.start[1],
      },
      { transaction: job.tx },
    );
  } catch (error) {
    if (isDuplicateOf(error, 'PRIMARY'))
      throw new Refusal('already-used', 'This technician exists already.');
    throw error;
  }
  await writeShifts(job, told.technicianId, told.shifts);
  job.touched.technicians.add(told.technicianId);
  job.note('technician', told.technicianId, 'added a technician');
  return technicianNow(job, told.technicianId);
}

/**
 * Changes a technician. Their route follows: it is timed anew, and whoever stops working leaves it,
 * unless they have accepted a stop.
 *
 * @throws Refusal `not-found`, `stale-version` with the technician as they are now,
 * `times-disagree`, or `stop-is-firm`
 */
export async function changeTechnician(
  job: Job,
  technicianId: string,
  told: z.output<typeof ChangeTechnician>,
): Promise<TechnicianDto> {
  const storm = await openStorm(job.tx);
  const [technician] = await lockTechnicians(job, [technicianId]);
  if (!technician) throw new Refusal('not-found', 'There is no such technician.');
  if (technician.version !== told.version)
    throw new Refusal(
      'stale-version',
      `${technician.name} has been changed since you looked.`,
      await technicianNow(job, technicianId),
    );
  const leaves = told.active === false && technician.active !== false;
  technician.set({
    ...(told.name === undefined ? {} : { name: told.name }),
    ...(told.phone === undefined ? {} : { phone: told.phone }),
    ...(told.skills === undefined ? {} : { skills: told.skills }),
    ...(told.van === undefined ? {} : { van: told.van }),
    ...(told.start === undefined ? {} : { startLon: told.start[0], startLat: told.start[1] }),
    ...(told.active === undefined ? {} : { active: told.active }),
    version: technician.version + 1,
  });
  await technician.save({ transaction: job.tx });
  if (told.shifts) {
    await ShiftRecord.destroy({ where: { technicianId }, transaction: job.tx });
    await writeShifts(job, technicianId, told.shifts);
  }
  if (storm && leaves)
    await clearRoute(job, storm.id, technicianId, `${technician.name} has stopped working`);
  else if (storm && (told.shifts || told.start)) await settleRouteOf(job, storm.id, technicianId);
  job.touched.technicians.add(technicianId);
  const fields = ['name', 'phone', 'skills', 'van', 'start', 'shifts', 'active'] as const;
  const changed = fields.filter((field) => told[field] !== undefined);
  job.note('technician', technicianId, `changed ${changed.join(', ') || 'nothing'}`);
  return technicianNow(job, technicianId);
}

async function writeShifts(
  job: Job,
  technicianId: string,
  shifts: TechnicianDto['shifts'],
): Promise<void> {
  if (shifts.some(({ startsAt, endsAt }) => endsAt <= startsAt))
    throw new Refusal('times-disagree', 'A shift ends before it begins.');
  for (const shift of shifts) {
    const fault = breaksFault(shift, shift.breaks ?? []);
    if (fault !== null) throw new Refusal('times-disagree', fault);
  }
  try {
    await ShiftRecord.bulkCreate(
      shifts.map(({ startsAt, endsAt, breaks }) => ({
        id: randomUUID(),
        technicianId,
        startsAt: new Date(startsAt),
        endsAt: new Date(endsAt),
        breaks: breaks ?? [],
      })),
      { transaction: job.tx },
    );
  } catch (error) {
    if (isDuplicateOf(error, 'no_overlap'))
      throw new Refusal('times-disagree', 'Two shifts overlap.');
    throw error;
  }
}

async function technicianNow(job: Job, technicianId: string): Promise<TechnicianDto> {
  const [technician] = await technicianDtos(job.sequelize, { ids: [technicianId] }, job.tx);
  if (!technician) throw new Refusal('not-found', 'There is no such technician.');
  return technician;
}
