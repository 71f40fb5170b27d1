import type { RouteName } from '@shared/contract/paths';
import type { StopCard, StopDto } from '@shared/contract/routes';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import type { SignedIn } from '../staff/signed-in';
import { addStop, lockStop, moveStop, pullStop } from './desk-stops';
import { stopCard } from './open-stop';
import type { StopRecord } from './stop-record';
import { toStopDto } from './stop-rows';
import { acceptStop, arrive, declineStop, finishStop, startTravel, tellEta } from './visits';

type Names =
  | 'addStop'
  | 'lockStop'
  | 'moveStop'
  | 'pullStop'
  | 'acceptStop'
  | 'declineStop'
  | 'startTravel'
  | 'tellEta'
  | 'arrive'
  | 'finishStop';

interface Asked<Params, Body> {
  readonly person: SignedIn;
  readonly params: Params;
  readonly body: Body;
}
type Sent = { readonly commandId: string; readonly version: number };

/** Stops: what the desk does with them, and what their technician does. */
export function stopRoutes(context: Context): SomeHandlers<Names> {
  /** The desk gets the stop back as its board shows it. */
  const byDesk = <Params extends object, Body extends Sent>(
    name: RouteName,
    { person, params, body }: Asked<Params, Body>,
    work: (job: Job, told: Params & Body) => Promise<StopRecord>,
  ): Promise<{ stop: StopDto }> =>
    runCommand(context, orderFrom(name, person, { ...body, ...params }), async (job) => ({
      stop: toStopDto(await work(job, { ...body, ...params })),
    }));

  /** The technician gets the card back, also of a stop that is over with this. */
  const byTechnician = <Body extends Sent>(
    name: RouteName,
    { person, params, body }: Asked<{ readonly stopId: string }, Body>,
    work: (job: Job, told: Body & { readonly stopId: string }) => Promise<void>,
  ): Promise<{ card: StopCard }> =>
    runCommand(context, orderFrom(name, person, { ...body, ...params }), async (job) => {
      await work(job, { ...body, ...params });
      return { card: await stopCard(job, params.stopId) };
    });

  /** As `byTechnician`, for what may write a text. */
  const andText: typeof byTechnician = async (name, asked, work) => {
    const reply = await byTechnician(name, asked, work);
    context.wakeOutbox();
    return reply;
  };

  return {
    addStop: (asked) => byDesk('addStop', asked, addStop),
    lockStop: (asked) => byDesk('lockStop', asked, lockStop),
    moveStop: (asked) => byDesk('moveStop', asked, moveStop),
    pullStop: (asked) => byDesk('pullStop', asked, pullStop),
    acceptStop: (asked) => byTechnician('acceptStop', asked, acceptStop),
    declineStop: (asked) => byTechnician('declineStop', asked, declineStop),
    startTravel: (asked) => andText('startTravel', asked, startTravel),
    tellEta: (asked) => andText('tellEta', asked, tellEta),
    arrive: (asked) => byTechnician('arrive', asked, arrive),
    finishStop: (asked) => byTechnician('finishStop', asked, finishStop),
  };
}
