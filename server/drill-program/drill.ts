import { randomUUID } from 'node:crypto';
import { setMaxListeners } from 'node:events';
import type { ReplyOf } from '@shared/contract/http';
import { Dice } from '@shared/domain/simulation/dice';
import { makeStorm } from '@shared/domain/simulation/make-storm';
import { NEVER } from '@shared/domain/simulation/storm';
import { Chance } from '../demo/demo-calls';
import { DrillClock } from './drill-clock';
import { gatherCrew } from './drill-crew';
import { playCall, type Desk } from './drill-desk';
import { DrillTally } from './drill-tally';
import { work } from './drill-technician';
import { EXIT_NOT_ALLOWED, NoDrill, signIn, stormOf, type FoundServer } from './find-server';
import type { PersonAtWork } from './person-at-work';

export interface DrillOptions {
  readonly seed: number;
  readonly calls: number;
  readonly technicians: number;
  /** Drill seconds in a second of the server's time. */
  readonly speed: number;
  /** Ends the drill after so many drill hours; left out, when everything is done or the storm is over. */
  readonly hours?: number;
  readonly isInsisted: boolean;
  /** The least that the server is given between two plans, in seconds. */
  readonly leastPlanSeconds?: number;
  readonly signal: AbortSignal;
  readonly say: (line: string) => void;
}

export interface DrillResult {
  readonly tally: DrillTally;
  readonly drillHours: number;
  /** What the board's own count adds up to, since the drill began. */
  readonly savedCents: number;
  readonly lostCents: number;
  readonly openCalls: number;
}

/** Drill seconds between plans, and the least that the server is given between them. */
const PLAN_EVERY = 600;
const LEAST_PLAN_SECONDS = 4;
const SAY_EVERY_SECONDS = 10;
const HOUR = 3600;

/** Plays a made-up storm into a running server, by nothing but what people at its screens could do. */
export async function playDrill(server: FoundServer, options: DrillOptions): Promise<DrillResult> {
  const { seed, speed, say } = options;
  const { person: owner, me } = await signIn(server, noteOf(server, 'owner'));
  const stormId = stormOf(me, options.isInsisted);
  const storm = makeStorm({ seed, calls: options.calls, technicians: options.technicians });
  const crew = await gatherCrew(server, owner, options.technicians, me.region.centre);
  const desks = server.signIns.filter(({ role }) => role === 'dispatcher');
  const dispatchers = await Promise.all(
    desks.map(async (note) => (await signIn(server, note)).person),
  );
  if (dispatchers.length === 0)
    throw new NoDrill(EXIT_NOT_ALLOWED, 'The sign-ins name no dispatcher.');

  const ending = new AbortController();
  const signal = AbortSignal.any([options.signal, ending.signal]);
  // Everybody in the drill listens for its end.
  setMaxListeners(0, signal);
  const starts = (storm.calls[0]?.calledAt ?? 0) - 60;
  const clock = new DrillClock(speed, starts, signal);
  const tally = new DrillTally();
  const desk: Desk = {
    stormId,
    dispatchers,
    feeders: (await dispatchers[0]!.call('feeders')).feeders,
    centre: me.region.centre,
    clock,
    tally,
    dice: new Dice(seed + 1),
    chance: new Chance(`drill ${seed} ${randomUUID()}`),
    // No area code ends in 11; each drill has others, so that it meets new households.
    areaCode: 220 + (Math.floor(Date.now() / 60_000) % 70) * 10,
    mayText: Boolean(me.isDemo),
  };
  const before = await drainOf(owner, stormId);
  const boardSocket = dispatchers[0]!.listen(() => void tally.announcements++);
  say(
    `Drill ${seed}: ${storm.calls.length + storm.settledByPhone} calls, ${crew.length} technicians, ${speed} times as fast as the clock, into "${me.storm!.name}" at ${server.address}`,
  );

  const calls = playCalls(desk, storm.calls, storm.settledByPhone);
  const people = [
    ...crew.map((person, index) =>
      work({ person, clock, tally, dice: new Dice(seed + 100 + index) }),
    ),
    planNowAndThen(dispatchers[0]!, stormId, clock, tally, options.leastPlanSeconds),
    sayNowAndThen(owner, stormId, clock, tally, say),
  ];
  const end = options.hours === undefined ? storm.end : starts + options.hours * HOUR;
  await Promise.race([
    clock.until(end),
    calls.then(() => untilNothingIsOpen(owner, stormId, clock)),
  ]);
  ending.abort();
  await Promise.all([...people, calls]);
  boardSocket.close();

  const after = await drainOf(owner, stormId);
  return {
    tally,
    drillHours: (clock.now() - starts) / HOUR,
    savedCents: after.savedCents - before.savedCents,
    lostCents: after.lostCents - before.lostCents,
    openCalls: after.open,
  };
}

function noteOf({ signIns }: FoundServer, role: 'owner'): FoundServer['signIns'][number] {
  const note = signIns.find((one) => one.role === role);
  if (!note) throw new NoDrill(EXIT_NOT_ALLOWED, `The sign-ins name no ${role}.`);
  return note;
}

async function playCalls(
  desk: Desk,
  visits: ReturnType<typeof makeStorm>['calls'],
  settledByPhone: number,
): Promise<void> {
  // Calls that a word on the phone settles come like the others do: each beside one of them.
  const beside = Array.from({ length: settledByPhone }, () => {
    const { calledAt, readyAt } = desk.dice.pick(visits);
    const later = desk.dice.between(0, HOUR);
    return { calledAt: calledAt + later, readyAt: readyAt + later, cancelledAt: NEVER };
  });
  const all = [
    ...visits.map((call) => ({ call, needsVisit: true })),
    ...(visits.length > 0 ? beside : []).map((call) => ({ call, needsVisit: false })),
  ].sort((one, other) => one.call.calledAt - other.call.calledAt);
  await Promise.all(
    all.map(({ call, needsVisit }, number) => playCall(desk, call, number, needsVisit)),
  );
}

/** Proposes and publishes, as a dispatcher would, unless the routes go on by themselves. */
async function planNowAndThen(
  dispatcher: PersonAtWork,
  stormId: string,
  clock: DrillClock,
  tally: DrillTally,
  leastSeconds = LEAST_PLAN_SECONDS,
): Promise<void> {
  const pause = Math.max(PLAN_EVERY, leastSeconds * clock.speed);
  while (await clock.wait(pause)) {
    await tally.step(async () => {
      const { me } = await dispatcher.call('me');
      if (me?.settings.automaticRoutes === 'publish') return;
      const proposed = await dispatcher.call('proposePlan', {
        params: { stormId },
        body: { planId: randomUUID(), seconds: 0.5 },
      });
      const { id, version } = planOf(proposed);
      await dispatcher.call('publishPlan', { params: { planId: id }, body: { version } });
      tally.plansPublished++;
    });
  }
}

const planOf = (reply: ReplyOf<'proposePlan'>): { id: string; version: number } =>
  'plan' in reply ? (reply as { plan: { id: string; version: number } }).plan : reply;

async function sayNowAndThen(
  owner: PersonAtWork,
  stormId: string,
  clock: DrillClock,
  tally: DrillTally,
  say: (line: string) => void,
): Promise<void> {
  while (await clock.wait(SAY_EVERY_SECONDS * clock.speed)) {
    const drain = await tally.step(() => drainOf(owner, stormId));
    if (drain)
      say(
        `${timeOfDay(clock.now())}  ${summaryLine(tally)}, open ${drain.open}, at risk $${dollars(drain.valueAtRiskCents)}`,
      );
  }
}

export const summaryLine = (tally: DrillTally): string =>
  `taken ${tally.taken}, settled by phone ${tally.settledByPhone}, visits ${tally.visits}, called off ${tally.calledOff}, plans ${tally.plansPublished}, overtaken ${tally.overtaken}, faults ${tally.faults.length}`;

export const dollars = (cents: number): string => Math.round(cents / 100).toString();

function timeOfDay(time: number): string {
  const minutes = Math.floor(time / 60);
  const clock = [Math.floor(minutes / 60) % 24, minutes % 60].map((part) =>
    String(part).padStart(2, '0'),
  );
  return `day ${1 + Math.floor(time / 86_400)} ${clock.join(':')}`;
}

async function untilNothingIsOpen(
  owner: PersonAtWork,
  stormId: string,
  clock: DrillClock,
): Promise<void> {
  while (await clock.wait(SAY_EVERY_SECONDS * clock.speed)) {
    if ((await drainOf(owner, stormId)).open === 0) return;
  }
}

async function drainOf(owner: PersonAtWork, stormId: string) {
  const { series } = await owner.call('drain', { params: { stormId } });
  const last = series.at(-1);
  return last ?? { open: 0, savedCents: 0, lostCents: 0, valueAtRiskCents: 0 };
}
