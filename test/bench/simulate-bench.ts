import {
  comparePolicies,
  POLICY_NAMES,
  type PolicyRun,
  type PolicyTable,
} from '@shared/domain/simulation/compare-policies';

/**
 * Twenty made-up storms under each way to dispatch: means with their spread, and how the planner stands to
 * the others. Everything in it follows from the seeds; only the time that it takes does not.
 */
const SEEDS = Array.from(
  { length: Number(process.env['THAWLINE_BENCH_STORMS'] ?? 20) },
  (_, index) => index + 1,
);
const ITERATIONS = 1000;
const CLAIRVOYANT_ITERATIONS = 60_000;

const options = {
  seeds: SEEDS,
  calls: 600,
  technicians: 12,
  policies: POLICY_NAMES,
  rolling: { iterations: ITERATIONS },
  clairvoyantIterations: CLAIRVOYANT_ITERATIONS,
};
const began = process.cpuUsage().user;
const table = comparePolicies({
  ...options,
  onRun: (seed, policy) => process.stderr.write(`    storm ${seed}: ${policy}\n`),
});
const cpuSeconds = (process.cpuUsage().user - began) / 1e6;

process.stdout.write(
  JSON.stringify({ ...options, cpuSeconds, policies: table, thawlineAgainst: comparisons(table) }),
);

function comparisons({ thawline, ...others }: PolicyTable): object {
  return Object.fromEntries(
    Object.entries(others).map(([policy, other]) => {
      const times = (name: keyof PolicyRun): number =>
        Number((thawline![name].mean / other[name].mean).toFixed(3));
      const figures = {
        valueSavedTimes: times('valueSaved'),
        driveMinutesPerStopTimes: times('driveMinutesPerStop'),
        visitsTimes: times('visits'),
      };
      return [policy, figures];
    }),
  );
}
