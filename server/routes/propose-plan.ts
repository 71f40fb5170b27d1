import { randomUUID } from 'node:crypto';
import type { z } from 'zod';
import type { PlanDto, ProposePlan } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { isDuplicateOf } from '../db/sql';
import type { SignedIn } from '../staff/signed-in';
import { lockOpenStorm } from '../storms/storm-queries';
import { askPlanner } from './ask-planner';
import { setAside } from './overtake-plans';
import { planBody } from './plan-body';
import { planFacts, type PlanFacts } from './plan-facts';
import { planProblem } from './plan-problem';
import { toPlanDto, type PlanBody } from './plan-rows';
import type { Names } from './plan-words';
import { PlanRecord } from './stop-record';

/**
 * Proposes routes. The search runs on what was read before, without a lock and off the event loop;
 * only the finished proposal is written, and only if the routes are still those it was made from.
 *
 * @throws Refusal `storm-closed`, `plan-overtaken`, or `busy` when the planner does not answer
 */
export async function proposePlan(
  context: Context,
  person: SignedIn,
  told: z.output<typeof ProposePlan> & { readonly stormId: string },
): Promise<PlanDto> {
  const facts = await planFacts(context.sequelize, told.stormId, context.clock());
  if (!facts.isOpen) throw new Refusal('storm-closed', 'The storm is closed.');
  const problem = planProblem(facts);
  const answer = await askPlanner(context, facts, problem, { searchSeconds: told.seconds });
  const body = planBody({ facts, problem, answer }, namesOf(context, facts));

  return runCommand(context, orderFrom('proposePlan', person, told), (job) =>
    writeProposal(job, { stormId: told.stormId, planId: told.planId, epoch: facts.epoch, body }),
  );
}

/** How plans name people and times. */
export function namesOf({ region }: Pick<Context, 'region'>, { technicians }: PlanFacts): Names {
  const names = new Map(technicians.map(({ id, name }) => [id, name]));
  return { nameOf: (id) => names.get(id) ?? '', zone: region.dto.timeZone };
}

/**
 * Writes a proposal in place of those before it, if the routes are still those it was made from.
 *
 * @throws Refusal `storm-closed`, `plan-overtaken`, or `already-used`
 */
export async function writeProposal(
  job: Job,
  made: {
    readonly stormId: string;
    readonly planId?: string;
    readonly epoch: number;
    readonly body: PlanBody;
  },
): Promise<PlanDto> {
  const { stormId, planId = randomUUID(), epoch, body } = made;
  const storm = await lockOpenStorm(stormId, job.tx);
  job.inStorm(storm.id);
  if (storm.planEpoch !== epoch)
    throw new Refusal(
      'plan-overtaken',
      'The routes were changed while this was being planned. Propose again.',
    );
  await setAside(job, storm.id);
  const plan = PlanRecord.build({
    id: planId,
    stormId: storm.id,
    state: 'proposed',
    proposedAt: job.at,
    proposedBy: job.actor.name,
    body: JSON.stringify(body),
    baseEpoch: epoch,
  });
  try {
    await plan.save({ transaction: job.tx });
  } catch (error) {
    if (isDuplicateOf(error, 'PRIMARY'))
      throw new Refusal('already-used', 'A plan with this id exists already. Make a new id.');
    throw error;
  }
  job.touched.plans.add(plan.id);
  job.note(
    'plan',
    plan.id,
    `proposed routes with ${String(body.figures.stops)} stops, ${String(body.unplanned.length)} calls left out`,
  );
  return toPlanDto(plan);
}
