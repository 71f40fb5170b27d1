import { HOUR_MS, MINUTE_MS, type Instant } from '../instant';
import { countAreas, drawDelay, exposure, rungBy, type RingHabit } from './area-rings';
import type { Draws } from './draws';
import { drawDuration, drawMinutes, drawRest, meanMinutes } from './durations';
import type { CallPattern, ForecastFacts, PartChances } from './facts';
import { Fates, RUNS_AGAIN, SETTLED_OTHERWISE, TO_VISIT } from './fates';
import type { OtherRings } from './other-rings';
import { Stakes } from './stakes';
import { drawShares, PRIORS, type Shares } from './priors';
import type { RingClock } from './ring-clock';

/** One possible future of a storm. Every way of working in it meets the same calls and the same luck. */
export interface World {
  /** Those that are open now first, in the order of the facts; then those to come, in order of time. */
  readonly calls: Fates;
  readonly stakes: Stakes;
  /** What a visit takes on average, its drive with it; what a person would count on. */
  readonly visitMs: number;
  /** What a call takes on the phone on average. */
  readonly handleMs: number;
  /** For each technician with a stop under way: what is left of it. */
  readonly restMs: readonly number[];
}

/** More calls than this are not drawn: by then the forecast has nothing more to say. Our estimate. */
const MOST_CALLS = 20_000;

/** Draws one future that agrees with the facts. */
export function drawWorld(
  facts: ForecastFacts,
  draws: Draws,
  habit: RingHabit,
  other: OtherRings,
  until: Instant,
  clock: RingClock,
): World {
  const shares = drawShares(facts, draws);
  const handle = drawDuration(draws, PRIORS.handle, facts.phone.handleMinutes);
  const { visits } = facts;
  const service = drawDuration(draws, PRIORS.service(visits), visits.serviceMinutes);
  const drive = drawDuration(draws, PRIORS.drive(visits), visits.driveMinutes);
  const rings = Float64Array.from([
    ...areaRings(facts, draws, habit, shares, until, clock),
    ...otherRings(facts, draws, other, until, clock),
  ])
    .sort()
    .subarray(0, MOST_CALLS);

  const open = facts.calls.length;
  const calls = new Fates(open, rings.length);
  const stakes = new Stakes();
  const decide = (i: number, parts: PartChances, isForParts: boolean): void => {
    calls.phoneEnd[i] =
      draws.unit() >= shares.byPhone
        ? TO_VISIT
        : draws.unit() < shares.running
          ? RUNS_AGAIN
          : SETTLED_OTHERWISE;
    calls.handleMs[i] = drawMinutes(draws, handle) * MINUTE_MS;
    calls.driveMs[i] = drawMinutes(draws, drive) * shares.work * MINUTE_MS;
    calls.serviceMs[i] = drawMinutes(draws, service) * shares.work * MINUTE_MS;
    // Whoever waits for a part that was ordered gets it with the next visit.
    const part = isForParts ? -1 : partOf(draws, parts, shares.partScale);
    const isOrdered = !isForParts && !facts.hasVanStock && draws.unit() < shares.ordered;
    const isNobodyHome = draws.unit() < shares.nobodyHome;
    calls.part[i] = part;
    calls.firstVisitFails[i] = Number(isOrdered || isNobodyHome);
    calls.isRepaired[i] = Number(draws.unit() < shares.repaired);
    const parkedHours = isForParts || part >= 0 || isOrdered ? shares.partsHours : shares.homeHours;
    calls.parkedMs[i] = parkedHours * Math.exp(PRIORS.parkedSpread * draws.normal()) * HOUR_MS;
    calls.pull[i] = Math.exp(shares.pullSpread * draws.normal());
    calls.endsAfterMs[i] = draws.exponential(1 / shares.endingPerHour) * HOUR_MS;
  };
  for (let i = 0; i < open; i++) {
    const call = facts.calls[i]!;
    decide(i, call.parts, call.stage === 'parts-on-order');
    if (call.checkingSince !== null)
      calls.handleMs[i] =
        drawRest(draws, handle, (facts.now - call.checkingSince) / MINUTE_MS) * MINUTE_MS;
    calls.serviceMs[i] = calls.serviceMs[i]! * (call.workTimes ?? 1);
    calls.at[i] = call.receivedAt;
    calls.skills[i] = call.skills;
    stakes.begin();
    for (const one of call.compartments)
      stakes.add(one.valueCents, one.saveByAt ?? Infinity, one.isMedicine);
  }
  const patternOf = patternPicker(facts.patterns, draws);
  for (let k = 0; k < rings.length; k++) {
    const at = rings[k]!;
    const pattern = patternOf();
    decide(open + k, pattern.parts, false);
    calls.at[open + k] = at;
    calls.skills[open + k] = pattern.skills;
    stakes.begin();
    for (const { valueCents, hoursLeft, isMedicine } of pattern.compartments)
      stakes.add(valueCents, hoursLeft === null ? Infinity : at + hoursLeft * HOUR_MS, isMedicine);
  }

  const restMs = facts.technicians.map(({ underWay, route, pace = 1 }) => {
    if (!underWay) return 0;
    const { drivingSince, atDoorSince } = underWay;
    const times = pace * (facts.calls[route[0] ?? -1]?.workTimes ?? 1);
    const minutes =
      atDoorSince === null
        ? drawRest(draws, drive, (facts.now - (drivingSince ?? facts.now)) / MINUTE_MS) +
          times * drawMinutes(draws, service)
        : times * drawRest(draws, service, (facts.now - atDoorSince) / MINUTE_MS / times);
    return minutes * MINUTE_MS;
  });
  return {
    calls,
    stakes,
    handleMs: meanMinutes(handle) * MINUTE_MS,
    visitMs: (meanMinutes(drive) + meanMinutes(service)) * MINUTE_MS,
    restMs,
  };
}

/** One of the parts by its chance, or none. */
function partOf(draws: Draws, parts: PartChances, scale: number): number {
  let left = draws.unit();
  for (const [part, chance] of parts) if ((left -= chance * scale) < 0) return part;
  return -1;
}

const NO_PATTERN: CallPattern = { compartments: [], skills: 0, parts: [], weight: 1 };

/** Patterns by weights that differ from draw to draw (Rubin, Annals of Statistics 9(1), 1981; memory). */
function patternPicker(patterns: readonly CallPattern[], draws: Draws): () => CallPattern {
  let total = 0;
  const sums = patterns.map(({ weight }) => (total += draws.gamma(weight)));
  return () => {
    const at = draws.unit() * total;
    let [low, high] = [0, sums.length - 1];
    while (low < high) {
      const middle = (low + high) >> 1;
      if (sums[middle]! > at) high = middle;
      else low = middle + 1;
    }
    return patterns[low] ?? NO_PATTERN;
  };
}

/** When the calls to come from each area ring, of those that ring before `until`. */
function areaRings(
  facts: ForecastFacts,
  draws: Draws,
  habit: RingHabit,
  shares: Shares,
  until: Instant,
  clock: RingClock,
): Instant[] {
  const { now, areas } = facts;
  const counts = countAreas(areas, now, clock);
  // No two storms ring by quite the same pattern, and no pattern says how this one strays.
  const stray = Math.exp(PRIORS.ringStray * draws.normal());
  return areas.flatMap((area, i) => {
    const count = counts[i]!;
    const calls =
      stray *
      draws.gamma(habit.alike + count.rings, habit.alike / habit.perArea + exposure(count, habit));
    const rings: Instant[] = [];
    let since = count.backHours;
    let backAt = area.backAt ?? Infinity;
    if (backAt > now) {
      backAt =
        area.backAt === null
          ? now + draws.exponential(shares.outHours) * HOUR_MS
          : now + (backAt - now) * Math.exp(PRIORS.toldSpread * draws.normal());
      const from = clock.at(now);
      const out = clock.at(Math.min(backAt, until)) - from;
      for (let n = draws.poisson(calls * habit.during * out); n > 0; n--)
        rings.push(clock.moment(from + draws.unit() * out));
      since = 0;
    }
    if (backAt >= until) return rings;
    for (let n = draws.poisson(calls * (1 - rungBy(since, habit))); n > 0; n--) {
      const at = clock.moment(clock.at(backAt) + drawDelay(draws, habit, since));
      if (at > now && at < until) rings.push(at);
    }
    return rings;
  });
}

function otherRings(
  { now }: ForecastFacts,
  draws: Draws,
  other: OtherRings,
  until: Instant,
  clock: RingClock,
): Instant[] {
  const from = clock.at(now);
  const whole = -Math.expm1(-other.fading * clock.between(now, until));
  return Array.from({ length: draws.poisson((other.now * whole) / other.fading) }, () =>
    clock.moment(from - Math.log1p(-draws.unit() * whole) / other.fading),
  );
}
