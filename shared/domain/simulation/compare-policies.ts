import { clairvoyantOutcome } from './clairvoyant';
import { makeStorm } from './make-storm';
import { RollingPolicy, type RollingFigures, type RollingOptions } from './rolling-policy';
import { runStorm } from './run-storm';
import { SIMPLE_POLICIES } from './simple-policies';
import { stormFigures, type StormFigures } from './storm-figures';

export const POLICY_NAMES = [
  ...(Object.keys(SIMPLE_POLICIES) as (keyof typeof SIMPLE_POLICIES)[]),
  'thawline',
  'clairvoyant',
] as const;
export type PolicyName = (typeof POLICY_NAMES)[number];

export interface ComparisonOptions {
  readonly seeds: readonly number[];
  readonly calls: number;
  readonly technicians: number;
  readonly policies: readonly PolicyName[];
  readonly rolling: RollingOptions;
  /** Rounds of the clairvoyant search. */
  readonly clairvoyantIterations: number;
  readonly onRun?: (seed: number, policy: PolicyName, figures: PolicyRun) => void;
}

/** Figures of one storm under one policy; those of the rolling plans only where there were any. */
export interface PolicyRun extends StormFigures {
  readonly invalidPlans: number;
  readonly plans: number;
  /** Share of the stops due within two hours that the next plan moved. */
  readonly changedSoon: number;
}

/** A mean over the seeds, and how far the seeds lie apart: the sample standard deviation. */
export interface Spread {
  readonly mean: number;
  readonly deviation: number;
  readonly least: number;
  readonly most: number;
}

export type PolicyTable = Partial<Record<PolicyName, Readonly<Record<keyof PolicyRun, Spread>>>>;

export function runPolicy(seed: number, policy: PolicyName, options: ComparisonOptions): PolicyRun {
  const storm = makeStorm({ seed, calls: options.calls, technicians: options.technicians });
  const none = { plans: 0, invalidPlans: 0, changedSoon: 0 };
  if (policy === 'clairvoyant') {
    const outcome = clairvoyantOutcome(storm, options.clairvoyantIterations);
    return {
      ...stormFigures(outcome, storm.end),
      ...none,
      plans: 1,
      invalidPlans: outcome.invalidPlans,
    };
  }
  if (policy !== 'thawline') {
    return { ...stormFigures(runStorm(storm, SIMPLE_POLICIES[policy]()), storm.end), ...none };
  }
  const rolling = new RollingPolicy(seed, options.rolling);
  const outcome = runStorm(storm, rolling);
  return { ...stormFigures(outcome, storm.end), ...changes(rolling.figures) };
}

function changes({ plans, invalidPlans, soonStops, changedStops }: RollingFigures) {
  return { plans, invalidPlans, changedSoon: changedStops / Math.max(1, soonStops) };
}

/** Runs every policy on every seed's storm. */
export function comparePolicies(options: ComparisonOptions): PolicyTable {
  const runs = new Map<PolicyName, PolicyRun[]>(options.policies.map((name) => [name, []]));
  for (const seed of options.seeds) {
    for (const [policy, list] of runs) {
      const run = runPolicy(seed, policy, options);
      list.push(run);
      options.onRun?.(seed, policy, run);
    }
  }
  return Object.fromEntries([...runs].map(([policy, list]) => [policy, spreads(list)]));
}

function spreads(runs: readonly PolicyRun[]): Record<keyof PolicyRun, Spread> {
  const names = Object.keys(runs[0] ?? {}) as (keyof PolicyRun)[];
  return Object.fromEntries(
    names.map((name) => [name, spread(runs.map((run) => run[name]))]),
  ) as Record<keyof PolicyRun, Spread>;
}

export function spread(values: readonly number[]): Spread {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  const squares = values.reduce((sum, value) => sum + (value - mean) ** 2, 0);
  return {
    mean,
    deviation: values.length > 1 ? Math.sqrt(squares / (values.length - 1)) : 0,
    least: Math.min(...values),
    most: Math.max(...values),
  };
}
