import { randomUUID } from 'node:crypto';
import type { LonLat } from '@shared/contract/common';
import type { TechnicianDto } from '@shared/contract/routes';
import { FAMILY_NAMES, GIVEN_NAMES } from '../demo/demo-people';
import { signIn, type FoundServer } from './find-server';
import { PersonAtWork } from './person-at-work';

const HOUR_MS = 3_600_000;
/** As long as a drill may last in the server's time. */
const SHIFT_HOURS = 14;

/** Signs in so many technicians: those of the demo, then others whom the owner adds. */
export async function gatherCrew(
  server: FoundServer,
  owner: PersonAtWork,
  count: number,
  centre: LonLat,
): Promise<readonly PersonAtWork[]> {
  const notes = server.signIns.filter(({ role }) => role === 'technician').slice(0, count);
  const crew: PersonAtWork[] = [];
  for (const note of notes) {
    const { person, me } = await signIn(server, note);
    if (me.user.technicianId) await putOnShift(owner, me.user.technicianId);
    crew.push(person);
  }
  for (let index = crew.length; index < count; index++) {
    crew.push(await addTechnician(server, owner, index, centre));
  }
  return crew;
}

async function addTechnician(
  server: FoundServer,
  owner: PersonAtWork,
  index: number,
  centre: LonLat,
): Promise<PersonAtWork> {
  const name = `${GIVEN_NAMES.at(-1 - (index % GIVEN_NAMES.length))!} ${FAMILY_NAMES.at(-1 - (index % FAMILY_NAMES.length))!}`;
  const signInName = `drill-${index}@example.com`;
  const { users } = await owner.call('listUsers');
  const known = users.find((user) => user.signInName === signInName);
  let password: string;
  if (known) {
    if (known.technicianId) await putOnShift(owner, known.technicianId);
    const reset = { params: { userId: known.id }, body: { version: known.version } };
    ({ password } = await owner.call('resetPassword', reset));
  } else {
    const technicianId = randomUUID();
    await owner.call('addTechnician', {
      body: {
        technicianId,
        name,
        phone: `+125255501${String(30 + (index % 70)).padStart(2, '0')}`,
        skills: index % 2 === 0 ? ['electrical', 'sealed-system'] : ['electrical', 'commercial'],
        van: { 'start-relay': 6, overload: 6, 'run-capacitor': 4, 'control-board': 2 },
        start: centre,
        shifts: [shiftFromNow()],
      },
    });
    const user = {
      userId: randomUUID(),
      name,
      signInName,
      role: 'technician',
      technicianId,
    } as const;
    ({ password } = await owner.call('addUser', { body: user }));
  }
  const person = new PersonAtWork(name, server.address);
  await person.signIn(signInName, password);
  await person.call('changePassword', {
    body: { current: password, next: `drill ${randomUUID()}`, endOtherSessions: true },
  });
  return person;
}

/** A demo that was made days ago has nobody on shift today. */
async function putOnShift(owner: PersonAtWork, technicianId: string): Promise<void> {
  const { technicians } = await owner.call('listTechnicians');
  const technician: TechnicianDto | undefined = technicians.find(({ id }) => id === technicianId);
  const now = Date.now();
  if (
    !technician ||
    technician.shifts.some((one) => one.startsAt <= now && one.endsAt > now + HOUR_MS)
  )
    return;
  const kept = technician.shifts.filter(
    (one) => one.endsAt <= now || one.startsAt >= now + SHIFT_HOURS * HOUR_MS,
  );
  await owner.call('changeTechnician', {
    params: { technicianId },
    body: { version: technician.version, shifts: [...kept.slice(-20), shiftFromNow()] },
  });
}

const shiftFromNow = () => ({
  startsAt: Date.now() - HOUR_MS,
  endsAt: Date.now() + SHIFT_HOURS * HOUR_MS,
});
