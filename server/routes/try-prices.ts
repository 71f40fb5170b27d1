import type { z } from 'zod';
import type { PlanTrialDto, TryPrices } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import type { Context } from '../context';
import type { PlannerResponse } from '../workers/planner-client';
import { askPlanner } from './ask-planner';
import { figuresBeside } from './plan-body';
import { planFacts } from './plan-facts';
import { planProblem } from './plan-problem';

/**
 * Plans twice from the same facts, by the prices that are set and by others, and keeps neither.
 *
 * @throws Refusal `storm-closed`, or `busy` when the planner does not answer
 */
export async function tryPrices(
  context: Context,
  { stormId, prices, seconds }: z.output<typeof TryPrices> & { readonly stormId: string },
): Promise<PlanTrialDto> {
  const facts = await planFacts(context.sequelize, stormId, context.clock());
  if (!facts.isOpen) throw new Refusal('storm-closed', 'The storm is closed.');
  const ask = (problem: ReturnType<typeof planProblem>): Promise<PlannerResponse | null> =>
    askPlanner(context, facts, problem, { searchSeconds: seconds, explains: false });
  const asSet = await ask(planProblem(facts));
  const tried = await ask(planProblem(facts, { prices }));
  const [set, other] = [
    figuresBeside({ facts, answer: asSet }),
    figuresBeside({ facts, answer: tried }),
  ];
  const [onSet, onTried] = [planned(asSet), planned(tried)];
  return {
    inForce: set.inForce,
    asSet: set.figures,
    tried: other.figures,
    onlyAsSet: [...onSet].filter((id) => !onTried.has(id)),
    onlyTried: [...onTried].filter((id) => !onSet.has(id)),
  };
}

const planned = (answer: PlannerResponse | null): ReadonlySet<string> =>
  new Set(answer?.plan.routes.flatMap(({ stops }) => stops.map(({ job }) => job)));
