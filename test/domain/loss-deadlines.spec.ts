import fc from 'fast-check';
import { COMPARTMENT_KINDS } from '@shared/domain/cold-unit';
import { HOUR_MS } from '@shared/domain/instant';
import {
  latestStart,
  lossStakes,
  type CompartmentAtStake,
  type DeadlineSetting,
} from '@shared/domain/planner/loss-deadlines';
import { MOST_DEADLINES, posedCall, POSING, type Posing } from '@shared/domain/planner/pose';
import { thawClock } from '@shared/domain/thaw/thaw-clock';
import { aCompartment, aMedicine, at, LOST_AT, lossUntil } from './thaw-facts';

const SERVICE = 45 * 60;

const setting = (hours: number, change: Partial<DeadlineSetting> = {}): DeadlineSetting => ({
  now: at(hours),
  serviceSeconds: SERVICE,
  weights: { medicine: 5, household: 2 },
  householdAtRisk: false,
  ...change,
});

const atStake = (
  facts: Parameters<typeof thawClock>[0],
  valueCents = facts.valueCents,
): CompartmentAtStake => {
  const { earliestAt, likelyAt, saveByAt } = thawClock(facts, lossUntil());
  return { kind: facts.kind, valueCents, earliestAt, likelyAt, saveByAt };
};

const AT_ONCE = [{ secondsBefore: 0, share: 1 }];
const EXACT: Posing = { foodSpread: AT_ONCE, medicineSpread: AT_ONCE, windowMargin: 0 };

/** As the planner gets them; without margins unless asked. */
const lossDeadlines = (
  compartments: readonly CompartmentAtStake[],
  told: DeadlineSetting,
  posing = EXACT,
) =>
  posedCall(
    { stakes: lossStakes(compartments, told), window: null },
    { now: told.now / 1000, medicineWeight: 5, lateDollars: 0, posing },
  ).deadlines;

const halfFreezer = atStake(
  aCompartment('freezer', { door: 'shut', roomF: 72, fill: 0.5, valueCents: 200_00 }),
);

/** Hours after the loss at which the work has to be done. */
const doneBy = (deadlines: ReturnType<typeof lossDeadlines>) =>
  deadlines.map((one) => (one.at + SERVICE + 1 - LOST_AT / 1000) / 3600);

describe('lossStakes', () => {
  it('splits a freezer over its earliest, likely and published moments', () => {
    const deadlines = lossDeadlines([halfFreezer], setting(2));
    // A logged freezer counted as half full, 0 to 32 F in a room of 72 F: 30.51 and 38.46 times
    // ln(72 / 40); and the published 24 h.
    const [earliest, likely, latest] = doneBy(deadlines);
    expect(earliest).toBeCloseTo(30.51 * Math.log(1.8), 2);
    expect(likely).toBeCloseTo(38.46 * Math.log(1.8), 2);
    expect(latest).toBe(24);
    expect(deadlines.map(({ value }) => value)).toEqual([30, 70, 100]);
  });

  it('counts a share whose moment has passed at the next one, as all can still be saved', () => {
    const value = (hours: number) =>
      lossDeadlines([halfFreezer], setting(hours)).map((one) => one.value);
    expect(value(18)).toEqual([100, 100]);
    expect(value(22.5)).toEqual([200]);
    expect(value(24)).toEqual([]);
  });

  it('needs the work done before the moment, not at it', () => {
    expect(latestStart(at(24), 0)).toBe(at(24) / 1000 - 1);
    expect(latestStart(at(24) + 1, 0)).toBe(at(24) / 1000);
  });

  it('weighs medicine, and everything in a household that can do less without', () => {
    const medicine = atStake(aMedicine({}, { valueCents: 60_00 }));
    const total = (change: Partial<DeadlineSetting>) =>
      lossDeadlines([medicine, halfFreezer], setting(1, change)).reduce(
        (sum, { value }) => sum + value,
        0,
      );
    expect(total({})).toBeCloseTo(5 * 60 + 200, 9);
    expect(total({ householdAtRisk: true })).toBeCloseTo(2 * (5 * 60 + 200), 9);
  });

  it('is never due where no rule may call the contents lost', () => {
    expect(lossDeadlines([atStake(aMedicine({ kind: 'injectable' }))], setting(1))).toEqual([]);
  });

  const moment = fc.integer({ min: 0, max: 60 * 60 }).map((minutes) => at(minutes / 60));
  const someCompartment: fc.Arbitrary<CompartmentAtStake> = fc
    .tuple(
      fc.constantFrom(...COMPARTMENT_KINDS),
      fc.nat(500_000),
      fc.tuple(moment, moment, moment),
      fc.boolean(),
    )
    .map(([kind, valueCents, moments, isUndated]) => {
      const [earliestAt, likelyAt, saveByAt] = [...moments].sort((a, b) => a - b) as [
        number,
        number,
        number,
      ];
      return isUndated
        ? { kind, valueCents, earliestAt, likelyAt: null, saveByAt: null }
        : { kind, valueCents, earliestAt, likelyAt, saveByAt };
    });

  it('keeps to a few moments in order, loses no value, and is never later than a published limit', () => {
    fc.assert(
      fc.property(
        fc.array(someCompartment, { maxLength: 8 }),
        fc.integer({ min: 0, max: 60 }),
        fc.constantFrom(EXACT, POSING),
        (compartments, hours, posing) => {
          const told = setting(hours);
          const deadlines = lossDeadlines(compartments, told, posing);
          const live = compartments.filter(
            ({ saveByAt }) => saveByAt !== null && saveByAt > told.now,
          );
          const worth = ({ kind, valueCents }: CompartmentAtStake) =>
            (valueCents / 100) * (kind === 'medicine' ? 5 : 1);
          expect(deadlines.length).toBeLessThanOrEqual(MOST_DEADLINES);
          expect(deadlines.map((one) => one.at)).toEqual(
            deadlines.map((one) => one.at).sort((a, b) => a - b),
          );
          const sum = (values: readonly number[]) => values.reduce((total, one) => total + one, 0);
          expect(sum(deadlines.map(({ value }) => value))).toBeCloseTo(sum(live.map(worth)), 6);

          // Whoever begins later than a limit allows has lost at least all that it limits.
          for (const start of live.flatMap(({ saveByAt }) => saveByAt ?? [])) {
            const late = latestStart(start, SERVICE) + 1;
            const lost = sum(deadlines.filter((one) => one.at < late).map(({ value }) => value));
            const limited = live.filter(({ saveByAt }) => saveByAt! <= start);
            expect(lost).toBeGreaterThanOrEqual(sum(limited.map(worth)) - 1e-6);
          }
        },
      ),
    );
  });

  it('keeps the last moment as it is, so that a call says as long as something can be saved', () => {
    fc.assert(
      fc.property(fc.array(someCompartment, { minLength: 1, maxLength: 8 }), (compartments) => {
        const told = setting(0);
        const last = lossDeadlines(compartments, told, POSING).at(-1)?.at;
        const limits = compartments
          .filter(({ valueCents, saveByAt }) => valueCents > 0 && saveByAt !== null)
          .flatMap(({ saveByAt }) => (saveByAt! > told.now ? [saveByAt!] : []));
        fc.pre(limits.length > 0);
        expect(last).toBe(latestStart(Math.max(...limits), SERVICE));
      }),
    );
  });
});

it('a service of some length moves every deadline by as much', () => {
  const deadlines = (serviceSeconds: number) =>
    lossDeadlines([halfFreezer], setting(2, { serviceSeconds })).map((one) => one.at);
  expect(deadlines(3_600)).toEqual(deadlines(0).map((one) => one - HOUR_MS / 1000));
});
