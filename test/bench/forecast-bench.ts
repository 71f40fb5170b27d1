import { NO_CHANGE } from '@shared/domain/forecast/crew-change';
import type { ForecastFacts } from '@shared/domain/forecast/facts';
import { forecast } from '@shared/domain/forecast/forecast';
import { holdAgainst, shareWithin, type Held } from '../support/coverage';
import { factsOf } from '../support/storm-seen';
import { TrueStorm } from '../support/storm-truth';

/** Forecasts are held against so many storms; their seeds are none that anything was tuned on. */
const STORMS = Number(process.env['STORMS'] ?? 200);
const FIRST_SEED = Number(process.env['FIRST_SEED'] ?? 20_001);
const FUTURES = 200;
const SIZES = [5, 500, 3000];

/** How often the bands hold the truth (80 % is right), and what a question of the manager costs. */
function main(): void {
  const held: Held[] = [];
  for (let seed = FIRST_SEED; held.length < STORMS; seed++)
    held.push(...holdAgainst([seed], FUTURES));
  const bandHours = held.map((one) => one.bandHours).sort((a, b) => a - b);
  process.stdout.write(
    JSON.stringify({
      storms: held.length,
      seeds: [FIRST_SEED, held.at(-1)?.storm],
      shareOfTruthsPercent: {
        emptyAt: shareWithin(held, 'emptyAt'),
        lostCents: shareWithin(held, 'lostCents'),
        medicineLost: shareWithin(held, 'medicineLost'),
      },
      emptyBandHours: {
        p25: rounded(bandHours[Math.floor(held.length / 4)]),
        p50: rounded(bandHours[Math.floor(held.length / 2)]),
      },
      whatIfCpuSeconds: Object.fromEntries(SIZES.map((size) => [size, costOf(size)])),
    }),
  );
}

/** CPU time of one core for one question, when the code is warm. */
function costOf(open: number): { readonly seconds: number; readonly futures: number } {
  const facts = stormOf(open);
  const change = { ...NO_CHANGE, technicians: 2 };
  forecast(facts, { seed: 1, change, futures: 20 });
  const before = process.cpuUsage().user;
  const { asItIs } = forecast(facts, { seed: 1, change });
  return { seconds: (process.cpuUsage().user - before) / 1e6, futures: asItIs.futures };
}

/** A storm with so many open calls, and a crew to match. */
function stormOf(open: number): ForecastFacts {
  const storm = new TrueStorm(5003);
  storm.runUntil(storm.lookAt);
  const facts = factsOf(storm);
  return {
    ...facts,
    calls: Array.from({ length: open }, (_, i) => ({
      ...facts.calls[i % facts.calls.length]!,
      checkingSince: null,
      stage: i % 4 === 0 ? 'phone' : 'visit',
    })),
    technicians: Array.from({ length: Math.min(60, 4 + Math.round(open / 60)) }, (_, i) => ({
      ...facts.technicians[i % facts.technicians.length]!,
      route: [],
      underWay: null,
    })),
  };
}

const rounded = (hours: number | undefined): number | null =>
  hours === undefined || !Number.isFinite(hours) ? null : Math.round(hours * 10) / 10;

main();
