import {
  comparePolicies,
  POLICY_NAMES,
  type PolicyName,
} from '@shared/domain/simulation/compare-policies';
import type { DispatchState, Policy } from '@shared/domain/simulation/dispatch-state';
import { makeStorm } from '@shared/domain/simulation/make-storm';
import { RollingPolicy } from '@shared/domain/simulation/rolling-policy';
import { runStorm } from '@shared/domain/simulation/run-storm';
import { SIMPLE_POLICIES } from '@shared/domain/simulation/simple-policies';
import { stormFigures } from '@shared/domain/simulation/storm-figures';

const SMALL = { calls: 45, technicians: 2 };
const rolling = (seed: number): RollingPolicy =>
  new RollingPolicy(seed, { iterations: 15, looksAhead: true });
const policies: Readonly<Record<string, (seed: number) => Policy>> = {
  ...SIMPLE_POLICIES,
  thawline: rolling,
};

describe('makeStorm', () => {
  it('gives the same storm for the same seed, and another one for another', () => {
    expect(makeStorm({ seed: 3, ...SMALL })).toEqual(makeStorm({ seed: 3, ...SMALL }));
    expect(makeStorm({ seed: 3, ...SMALL })).not.toEqual(makeStorm({ seed: 4, ...SMALL }));
  });

  it('keeps calls in order, and nobody ready, called off or agreed before the call', () => {
    const { calls, settledByPhone } = makeStorm({ seed: 5, calls: 300 });
    expect(calls.length + settledByPhone).toBe(300);
    expect(calls.map(({ calledAt }) => calledAt)).toEqual(
      calls.map(({ calledAt }) => calledAt).sort((one, other) => one - other),
    );
    const isOdd = calls.some(
      ({ calledAt, readyAt, cancelledAt, window }) =>
        readyAt <= calledAt || cancelledAt <= readyAt || (window !== null && window[0] <= readyAt),
    );
    expect(isOdd).toBe(false);
  });
});

describe.each(Object.keys(policies))('a storm under %s', (name) => {
  const storm = makeStorm({ seed: 2, ...SMALL });
  const policy = policies[name]!(2);
  const states: DispatchState[] = [];
  const outcome = runStorm(storm, {
    decide: (state) => {
      states.push(state);
      return policy.decide(state);
    },
  });

  it('keeps every call: visited once, called off, or left over', () => {
    expect(outcome.calls.map(({ call }) => call.id)).toEqual(storm.calls.map(({ id }) => id));
    const figures = stormFigures(outcome, storm.end);
    const calledOff = outcome.calls.filter(
      ({ call, startedAt }) => call.cancelledAt < Infinity && startedAt === null,
    ).length;
    expect(figures.visits).toBeGreaterThan(10);
    expect(figures.visits + figures.notVisited + calledOff).toBe(storm.calls.length);
    expect(figures.valueSaved + figures.valueLost).toBeCloseTo(figures.valueAtStake, 6);
  });

  it('sends only people with the skill and the part, one call at a time', () => {
    for (const technician of storm.technicians) {
      const visits = outcome.calls
        .filter((one) => one.technician === technician.id)
        .sort((one, other) => one.startedAt! - other.startedAt!);
      let freeAt = technician.shifts[0]!.start;
      for (const { call, startedAt } of visits) {
        expect(technician.skills).toEqual(expect.arrayContaining([...call.skills]));
        expect(startedAt).toBeGreaterThan(Math.max(freeAt, call.readyAt));
        freeAt = startedAt! + call.actualService;
      }
      for (const [part, count] of Object.entries(technician.parts)) {
        expect(visits.filter(({ call }) => call.part === part).length).toBeLessThanOrEqual(count);
      }
    }
  });

  it('knows nothing that has not come yet', () => {
    const early = states.flatMap(({ now, seen }) => seen.filter((call) => call.readyAt > now));
    const gone = states.flatMap(({ now, open }) => open.filter((call) => call.cancelledAt <= now));
    expect([early, gone]).toEqual([[], []]);
    expect(states.some(({ seen }) => seen.length < storm.calls.length)).toBe(true);
  });

  it('goes the same way again', () => {
    expect(runStorm(storm, policies[name]!(2))).toEqual(outcome);
  });
});

it('makes only plans in which the checker finds nothing', () => {
  const policy = rolling(8);
  runStorm(makeStorm({ seed: 8, ...SMALL }), policy);
  expect(policy.figures.plans).toBeGreaterThan(20);
  expect(policy.figures.invalidPlans).toBe(0);
});

it('compares policies on the same calls, and puts the spread beside the mean', () => {
  const seen: [number, PolicyName, number][] = [];
  const table = comparePolicies({
    ...SMALL,
    calls: 30,
    seeds: [1, 2],
    policies: POLICY_NAMES,
    rolling: { iterations: 5 },
    clairvoyantIterations: 50,
    onRun: (seed, policy, { valueAtStake }) => seen.push([seed, policy, valueAtStake]),
  });
  expect(Object.keys(table)).toEqual([...POLICY_NAMES]);
  for (const seed of [1, 2]) {
    const stakes = seen.filter(([one]) => one === seed).map(([, , stake]) => stake);
    expect(stakes).toHaveLength(POLICY_NAMES.length);
    expect(new Set(stakes).size).toBe(1);
  }
  const { valueSaved } = table.thawline!;
  expect(valueSaved.mean).toBeCloseTo((valueSaved.least + valueSaved.most) / 2, 6);
  expect(valueSaved.deviation).toBeCloseTo((valueSaved.most - valueSaved.least) / Math.SQRT2, 6);
});
