import { randomUUID } from 'node:crypto';
import type { PlanDto } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import { MINUTE_MS, type Instant } from '@shared/domain/instant';
import { isWorthChanging } from '@shared/domain/planner/pose';
import { machine } from '../commands/actor';
import { runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { readSettings } from '../office/settings';
import { StormRecord } from '../storms/storm-record';
import { askPlanner } from './ask-planner';
import { setAside } from './overtake-plans';
import { planBody } from './plan-body';
import { planFacts, type PlanFacts } from './plan-facts';
import { planProblem } from './plan-problem';
import { proposedPlan, type PlanBody } from './plan-rows';
import { namesOf, writeProposal } from './propose-plan';
import { publishPlan } from './publish-plan';
import { keyOf, rollingFacts, whatChanged, type RollingFacts } from './rolling-facts';
import { endTurn, endTurnWith, holdTurn, plannedKey, takeTurn } from './rolling-lease';

/** Under which name the automatic mode acts, on the screen and in the audit trail. */
export const AUTOMATIC = 'Automatic mode';
/** Seconds of search: events come often, and each plan starts from the routes in force. */
const SEARCH_SECONDS = 0.5;
/** A burst of events is planned once it is over, or after this many looks. */
const MOST_LOOKS = 8;
/** Somebody who has just proposed is looking at it: our estimate of how long. */
const LOOKED_AT_MS = 3 * MINUTE_MS;

/** What one server remembers between two looks. */
export interface RollingWatch {
  /** The facts of the look before, and for how many looks something has been to be done. */
  seen: string;
  looks: number;
  /** The facts that this server planned from last, to say what has changed. */
  planned: RollingFacts | null;
  readonly searchSeconds: number;
}
export const newWatch = (searchSeconds = SEARCH_SECONDS): RollingWatch => ({
  seen: '',
  looks: 0,
  planned: null,
  searchSeconds,
});

/** What came of a look; only for tests and the log. */
export type Rolled =
  | 'off'
  | 'nothing-new'
  | 'settling'
  | 'being-looked-at'
  | 'not-our-turn'
  | 'no-gain'
  | 'same-proposal'
  | 'proposed'
  | 'published';

/**
 * Plans the routes again when anything that they depend on has changed, and proposes or publishes what
 * gains enough, as the settings allow. It only compares what holds with what was planned from last, so it
 * may be called as often as one likes, by any number of processes.
 */
export async function rollRoutes(context: Context, watch: RollingWatch): Promise<Rolled> {
  const { sequelize } = context;
  const { automaticRoutes: mode } = await readSettings(sequelize);
  if (mode === 'off') return 'off';
  const storm = await StormRecord.findOne({ where: { state: 'open' } });
  if (!storm) return 'off';
  const now = context.clock();
  const facts = await rollingFacts(sequelize, storm.id, now);
  const key = keyOf(facts);
  if ((await plannedKey(sequelize, storm.id)) === key) {
    watch.looks = 0;
    watch.seen = key;
    return 'nothing-new';
  }
  const isSettled = watch.seen === key || ++watch.looks >= MOST_LOOKS;
  watch.seen = key;
  if (!isSettled) return 'settling';
  if (await isLookedAt(storm.id, now)) return 'being-looked-at';

  const holder = await takeTurn(sequelize, storm.id, key);
  if (holder === null) return 'not-our-turn';
  watch.looks = 0;
  try {
    const because = whatChanged(watch.planned, facts);
    const { searchSeconds } = watch;
    const turn = { holder, key, because, mode, searchSeconds };
    const rolled = await planAndAct(context, storm.id, turn);
    watch.planned = facts;
    return rolled;
  } catch (error) {
    await endTurn(sequelize, storm.id, holder, null);
    // Closed or changed meanwhile, or the planner had no time: the next look tries again.
    if (error instanceof Refusal) return 'not-our-turn';
    throw error;
  }
}

/** Whether a person has just proposed: it is not replaced under their eyes. */
async function isLookedAt(stormId: string, now: Instant): Promise<boolean> {
  const open = await proposedPlan(stormId);
  return open !== null && open.proposedBy !== AUTOMATIC && now - open.proposedAt < LOOKED_AT_MS;
}

interface Turn {
  readonly holder: string;
  readonly key: string;
  readonly because: string;
  readonly mode: 'propose' | 'publish';
  readonly searchSeconds: number;
}

async function planAndAct(context: Context, stormId: string, turn: Turn): Promise<Rolled> {
  const { sequelize } = context;
  const facts = await planFacts(sequelize, stormId, context.clock());
  if (!facts.isOpen) throw new Refusal('storm-closed', 'The storm is closed.');
  const { body, over } = await withinLimits(context, facts, turn.searchSeconds);
  const open = await proposedPlan(stormId);
  const gain = (body.gainCents ?? 0) / 100;
  if (
    !isWorthChanging(gain, facts.settings.automaticGainDollars) ||
    !changesAnything(facts, body)
  ) {
    if (open?.proposedBy === AUTOMATIC) await withdraw(context, stormId, turn);
    else await endTurn(sequelize, stormId, turn.holder, turn.key);
    return 'no-gain';
  }
  const heldBack = turn.mode === 'propose' ? null : over;
  const made = { ...body, automatic: { because: turn.because, heldBack } };
  const publishes = turn.mode === 'publish' && over === null;
  if (!publishes && open?.proposedBy === AUTOMATIC && orderOf(open) === orderOf(body)) {
    await endTurn(sequelize, stormId, turn.holder, turn.key);
    return 'same-proposal';
  }
  await act(context, facts, stormId, turn, made, publishes);
  return publishes ? 'published' : 'proposed';
}

/** A plan that changes no technician's stops more often than the hour allows, where there is one. */
async function withinLimits(
  context: Context,
  facts: PlanFacts,
  searchSeconds: number,
): Promise<{ readonly body: PlanBody; readonly over: string | null }> {
  const make = async (keepAlso: ReadonlySet<string>): Promise<PlanBody> => {
    const keepMinutes = facts.settings.automaticKeepMinutes;
    const problem = planProblem(facts, { keepMinutes, keepAlso });
    const answer = await askPlanner(context, facts, problem, { searchSeconds });
    return planBody({ facts, problem, answer }, namesOf(context, facts));
  };
  const first = await make(new Set());
  const over = beyondLimit(facts, first);
  if (over.length === 0) return { body: first, over: null };
  const body = await make(new Set(over));
  const [still] = beyondLimit(facts, body);
  if (still === undefined) return { body, over: null };
  const name = facts.technicians.find(({ id }) => id === still)?.name ?? '';
  return {
    body,
    over: `it changes more stops of ${name} than this hour allows (${String(facts.settings.changesPerHour)})`,
  };
}

const beyondLimit = ({ changesThisHour, settings }: PlanFacts, { routes }: PlanBody): string[] =>
  routes
    .filter(({ technicianId, changes = 0 }) => {
      const before = changesThisHour.get(technicianId) ?? 0;
      return changes > 0 && before + changes > settings.changesPerHour;
    })
    .map(({ technicianId }) => technicianId);

/** Whether the order of any route differs from that in force. */
function changesAnything({ technicians }: PlanFacts, { routes }: PlanBody): boolean {
  const planned = new Map(
    routes.map(({ technicianId, stops }) => [technicianId, stops.map(({ callId }) => callId)]),
  );
  return technicians.some(
    ({ id, stops }) => stops.map(({ callId }) => callId).join() !== (planned.get(id) ?? []).join(),
  );
}

const orderOf = ({ routes }: Pick<PlanDto, 'routes'>): string =>
  JSON.stringify(
    routes.map(({ technicianId, stops }) => [technicianId, stops.map(({ callId }) => callId)]),
  );

/** Writes the proposal and, where the mode is to publish, publishes it by the command of a person. */
async function act(
  context: Context,
  { epoch }: PlanFacts,
  stormId: string,
  { holder, key, because }: Turn,
  body: PlanBody,
  publishes: boolean,
): Promise<void> {
  const order = {
    actor: machine(AUTOMATIC),
    type: publishes ? 'publishPlan' : 'proposePlan',
    commandId: randomUUID(),
    asked: { stormId, key },
  };
  await runCommand(context, order, async (job) => {
    await holdTurn(job, stormId, holder);
    const plan = await writeProposal(job, { stormId, epoch, body });
    if (publishes) await publishPlan(job, { planId: plan.id, version: plan.version });
    const gain = `$${String(Math.round((body.gainCents ?? 0) / 100))}`;
    job.note('plan', plan.id, `automatic, since ${because}: gains ${gain}`);
    await endTurnWith(job, stormId, key);
    return null;
  });
  context.wakeOutbox();
}

/** A proposal of before that gains nothing any more is no longer offered for publishing. */
async function withdraw(
  context: Context,
  stormId: string,
  { holder, key, because }: Turn,
): Promise<void> {
  const order = {
    actor: machine(AUTOMATIC),
    type: 'discardPlan',
    commandId: randomUUID(),
    asked: { stormId, key },
  };
  await runCommand(context, order, async (job) => {
    await holdTurn(job, stormId, holder);
    job.inStorm(stormId);
    await setAside(job, stormId);
    job.note('storm', stormId, `automatic, since ${because}: the proposal gains nothing any more`);
    await endTurnWith(job, stormId, key);
    return null;
  });
}
