import type { StopCard } from '@shared/contract/routes';
import type { Dice } from '@shared/domain/simulation/dice';
import type { DrillClock } from './drill-clock';
import type { DrillTally } from './drill-tally';
import type { PersonAtWork } from './person-at-work';

/** Drill seconds after which a technician looks again, though nothing was announced. */
const LOOK_AGAIN = 600;
const SERVICE_MINUTES = 45;

export interface DrillTechnician {
  readonly person: PersonAtWork;
  readonly clock: DrillClock;
  readonly tally: DrillTally;
  readonly dice: Dice;
}

/** A technician's day until the drill ends: accept, drive, arrive, finish, and wait for what is next. */
export async function work(technician: DrillTechnician): Promise<void> {
  const { person, clock, tally } = technician;
  const bell = new Bell();
  const socket = person.listen(() => {
    tally.announcements++;
    bell.ring();
  });
  try {
    while (!clock.signal.aborted) {
      const day = await tally.step(() => person.call('technicianDay'));
      const next = [...(day?.stops ?? [])]
        .sort((one, other) => one.stop.position - other.stop.position)
        .find(({ stop }) => ['offered', 'accepted', 'travelling', 'on-site'].includes(stop.state));
      if (next) await doNext(technician, next);
      else await Promise.race([bell.heard(), clock.wait(LOOK_AGAIN)]);
    }
  } finally {
    socket.close();
  }
}

/** One step with the stop; the next look at the day finds the next one. */
async function doNext(
  { person, clock, tally, dice }: DrillTechnician,
  card: StopCard,
): Promise<void> {
  const { stop } = card;
  const asked = { params: { stopId: stop.id }, body: { version: stop.version } };
  const done = async (work: () => Promise<unknown>): Promise<boolean> => {
    if ((await tally.step(work)) !== null) return true;
    await clock.wait(60);
    return false;
  };
  switch (stop.state) {
    case 'offered':
      if (await done(() => person.call('acceptStop', asked))) tally.accepted++;
      return;
    case 'accepted':
      await done(() =>
        person.call('startTravel', { ...asked, body: { ...asked.body, from: null } }),
      );
      return;
    case 'travelling':
      if (!(await clock.wait(stop.driveMinutes * 60 * dice.noise(0.18)))) return;
      if (card.address.lonLat) {
        const position = { lonLat: card.address.lonLat, at: Date.now(), accuracyMeters: 12 };
        await tally.step(() => person.call('reportPosition', { body: { position } }));
      }
      await done(() => person.call('arrive', asked));
      return;
    case 'on-site':
      if (!(await clock.wait(SERVICE_MINUTES * 60 * dice.noise(0.5)))) return;
      if (
        await done(() =>
          person.call('finishStop', {
            ...asked,
            body: { ...asked.body, outcome: 'restored', note: 'Drill', partsUsed: [] },
          }),
        )
      ) {
        tally.visits++;
      }
  }
}

/** Lets one wait until something was announced. */
class Bell {
  private wake: () => void = () => undefined;

  ring(): void {
    this.wake();
  }

  heard(): Promise<void> {
    return new Promise((resolve) => (this.wake = resolve));
  }
}
