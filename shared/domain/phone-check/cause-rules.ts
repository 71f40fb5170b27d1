import type { CauseId, LikelyCause, Likelihood } from './causes';
import { LIKELIHOODS } from './causes';
import type { CheckUnit, Heard } from './question';
import { SOURCES, type SourceId } from './sources';

interface Rule {
  readonly cause: CauseId;
  readonly likelihood: Likelihood;
  readonly why: string;
  readonly source: SourceId;
  isTrue(heard: Heard, unit: CheckUnit): boolean;
}

/** What the unit does at the end: the answer after the restart counts, else the first one. */
const does = (heard: Heard, ...what: readonly string[]): boolean =>
  heard.said('start', ...what) ||
  (!heard.said('start', 'dead', 'lit-silent', 'clicks', 'runs', 'trips') &&
    heard.said('doing', ...what));

const triesToStart = (heard: Heard): boolean =>
  does(heard, 'clicks') || heard.said('sound', 'click-hum');
const fanOnly = (heard: Heard): boolean =>
  heard.said('fan', 'yes') && heard.said('sound', 'silent', 'click-hum');
const allSilent = (heard: Heard): boolean =>
  heard.said('fan', 'no') && heard.said('sound', 'silent');
const runs = (heard: Heard): boolean =>
  heard.said('doing', 'runs-warm') && !heard.said('sound', 'click-hum', 'silent');
const isRelay = (unit: CheckUnit): boolean => unit.compressorStart !== 'inverter';
const isInverter = (unit: CheckUnit): boolean => unit.compressorStart !== 'relay';
const isKnown = (unit: CheckUnit): boolean => unit.compressorStart !== 'unknown';

/** What each thing that was said points to. The strongest word for a cause counts. */
const RULES: readonly Rule[] = [
  {
    cause: 'area-outage',
    likelihood: 'likely',
    why: 'The power of the area is out or unsteady.',
    source: 'ohio',
    isTrue: (heard) => heard.said('power', 'area-out', 'unsteady'),
  },
  {
    cause: 'service-fault',
    likelihood: 'likely',
    why: 'The neighbours have power and this home has none.',
    source: 'practice',
    isTrue: (heard) => heard.said('power', 'home-only'),
  },
  {
    cause: 'open-neutral',
    likelihood: 'likely',
    why: 'Lights are too bright or too dim, or several things died at once.',
    source: 'openNeutral',
    isTrue: (heard) => heard.said('lights', 'yes') || heard.said('outlet', 'odd'),
  },
  {
    cause: 'wet-electrics',
    likelihood: 'likely',
    why: 'Water has touched it.',
    source: 'nema',
    isTrue: (heard) => heard.said('water', 'touched', 'standing'),
  },
  {
    cause: 'short-in-unit',
    likelihood: 'possible',
    why: 'Something smelled burnt.',
    source: 'practice',
    isTrue: (heard) => heard.said('fire', 'burning-smell', 'smoke'),
  },
  {
    cause: 'wiring-fault',
    likelihood: 'likely',
    why: 'It trips again although the unit is unplugged.',
    source: 'breaker',
    isTrue: (heard) =>
      heard.said('gfci', 'trips-unplugged') || heard.said('breaker-reset', 'trips-again'),
  },
  {
    cause: 'short-in-unit',
    likelihood: 'likely',
    why: 'The breaker or GFCI trips when the unit is on it.',
    source: 'breaker',
    isTrue: (heard) => heard.said('start', 'trips') || heard.said('walk-in-reset', 'trips-again'),
  },
  {
    cause: 'short-in-unit',
    likelihood: 'possible',
    why: 'It tripped again; whether the unit or the wiring does it is not known.',
    source: 'breaker',
    isTrue: (heard) =>
      heard.said('breaker', 'reset-tripped') || heard.said('gfci', 'trips-plugged'),
  },
  {
    cause: 'wiring-fault',
    likelihood: 'possible',
    why: 'It tripped again; whether the unit or the wiring does it is not known.',
    source: 'breaker',
    isTrue: (heard) =>
      heard.said('breaker', 'reset-tripped') || heard.said('gfci', 'trips-plugged'),
  },
  {
    cause: 'tripped-gfci',
    likelihood: 'likely',
    why: 'The outlet came back when the GFCI was reset.',
    source: 'gfci',
    isTrue: (heard) => heard.said('gfci', 'came-back'),
  },
  {
    cause: 'tripped-breaker',
    likelihood: 'likely',
    why: 'The breaker was off.',
    source: 'breaker',
    isTrue: (heard) => heard.said('breaker', 'tripped', 'reset-holds'),
  },
  {
    cause: 'dead-outlet',
    likelihood: 'likely',
    why: 'Nothing works in that outlet.',
    source: 'practice',
    isTrue: (heard) =>
      heard.said('outlet', 'dead') && heard.said('breaker', 'all-on', 'cannot-get-there'),
  },
  {
    cause: 'dead-outlet',
    likelihood: 'possible',
    why: 'The outlet could not be tried.',
    source: 'practice',
    isTrue: (heard) => heard.said('outlet', 'cannot-reach') && !heard.said('gfci', 'came-back'),
  },
  {
    cause: 'loose-plug',
    likelihood: 'likely',
    why: 'The plug was not all the way in.',
    source: 'practice',
    isTrue: (heard) => heard.said('plug', 'was-loose') && !does(heard, 'clicks', 'lit-silent'),
  },
  {
    cause: 'damaged-cord',
    likelihood: 'likely',
    why: 'Plug, cord or outlet show heat marks or damage.',
    source: 'practice',
    isTrue: (heard) => heard.said('plug', 'damaged'),
  },
  {
    cause: 'damaged-cord',
    likelihood: 'possible',
    why: 'The outlet works and the unit is dead.',
    source: 'practice',
    isTrue: (heard) => does(heard, 'dead') && heard.said('outlet', 'works'),
  },
  {
    cause: 'setting-off',
    likelihood: 'likely',
    why: 'The display or dial stood at off or demo.',
    source: 'practice',
    isTrue: (heard) => heard.said('settings', 'was-off'),
  },
  {
    cause: 'control-board',
    likelihood: 'likely',
    why: 'It cannot be brought out of demo or off.',
    source: 'practice',
    isTrue: (heard) => heard.said('settings', 'stuck'),
  },
  {
    cause: 'start-delay',
    likelihood: 'likely',
    why: 'It started after five minutes unplugged and a wait.',
    source: 'startDelay',
    isTrue: (heard) => heard.said('wait', 'done') && heard.said('start', 'runs'),
  },
  {
    cause: 'starter',
    likelihood: 'likely',
    why: 'It hums, clicks and stops: the starter tries.',
    source: 'starter',
    isTrue: (heard, unit) => triesToStart(heard) && unit.compressorStart === 'relay',
  },
  {
    cause: 'starter',
    likelihood: 'possible',
    why: 'It hums, clicks and stops; how its compressor is started is not known.',
    source: 'starter',
    isTrue: (heard, unit) => triesToStart(heard) && !isKnown(unit),
  },
  {
    cause: 'inverter-board',
    likelihood: 'likely',
    why: 'It tries and stops, and its compressor is driven by a board.',
    source: 'inverter',
    isTrue: (heard, unit) => triesToStart(heard) && unit.compressorStart === 'inverter',
  },
  {
    cause: 'inverter-board',
    likelihood: 'possible',
    why: 'It tries and stops; how its compressor is started is not known.',
    source: 'inverter',
    isTrue: (heard, unit) => triesToStart(heard) && !isKnown(unit),
  },
  {
    cause: 'compressor',
    likelihood: 'possible',
    why: 'A compressor that is stuck sounds the same as a bad starter.',
    source: 'practice',
    isTrue: triesToStart,
  },
  {
    cause: 'starter',
    likelihood: 'likely',
    why: 'The fan turns while the compressor is silent, so the main board gives power.',
    source: 'practice',
    isTrue: (heard, unit) => fanOnly(heard) && unit.compressorStart === 'relay',
  },
  {
    cause: 'inverter-board',
    likelihood: 'likely',
    why: 'The fan turns while the compressor is silent, so the main board gives power.',
    source: 'practice',
    isTrue: (heard, unit) => fanOnly(heard) && unit.compressorStart === 'inverter',
  },
  {
    cause: 'starter',
    likelihood: 'possible',
    why: 'The fan turns while the compressor is silent.',
    source: 'practice',
    isTrue: (heard, unit) => fanOnly(heard) && isRelay(unit),
  },
  {
    cause: 'inverter-board',
    likelihood: 'possible',
    why: 'The fan turns while the compressor is silent.',
    source: 'practice',
    isTrue: (heard, unit) => fanOnly(heard) && isInverter(unit),
  },
  {
    cause: 'control-board',
    likelihood: 'likely',
    why: 'Power gets in, and neither fan nor compressor gets any.',
    source: 'practice',
    isTrue: (heard) => allSilent(heard) && does(heard, 'lit-silent'),
  },
  {
    cause: 'thermostat',
    likelihood: 'possible',
    why: 'Power gets in, and neither fan nor compressor is called for.',
    source: 'practice',
    isTrue: (heard) => allSilent(heard) && does(heard, 'lit-silent'),
  },
  {
    cause: 'control-board',
    likelihood: 'possible',
    why: 'It stays dead on an outlet that works.',
    source: 'practice',
    isTrue: (heard) =>
      does(heard, 'dead') &&
      (heard.said('outlet', 'works') || heard.said('start', 'dead')) &&
      !fanOnly(heard),
  },
  {
    cause: 'evaporator-fan',
    likelihood: 'likely',
    why: 'The compressor pumps, but the cold does not get to the food.',
    source: 'practice',
    isTrue: (heard, unit) =>
      runs(heard) && heard.said('wall', 'warm') && unit.kind !== 'chest-freezer',
  },
  {
    cause: 'defrost',
    likelihood: 'likely',
    why: 'It runs, and thick frost was seen.',
    source: 'practice',
    isTrue: (heard) => runs(heard) && heard.said('frost', 'yes'),
  },
  {
    cause: 'condenser-fan',
    likelihood: 'possible',
    why: 'It runs without air at the grille.',
    source: 'practice',
    isTrue: (heard) => runs(heard) && heard.said('fan', 'no'),
  },
  {
    cause: 'door-gasket',
    likelihood: 'likely',
    why: 'The door has a gap.',
    source: 'practice',
    isTrue: (heard) => heard.said('seal', 'gap'),
  },
  {
    cause: 'sealed-system',
    likelihood: 'likely',
    why: 'It hums steadily, its walls stay cool, and it was weak before the storm.',
    source: 'practice',
    isTrue: (heard) =>
      runs(heard) &&
      heard.said('sound', 'steady-hum') &&
      heard.said('wall', 'cold') &&
      heard.said('before', 'weak'),
  },
  {
    cause: 'sealed-system',
    likelihood: 'possible',
    why: 'It runs, but its walls stay cool.',
    source: 'practice',
    isTrue: (heard) => runs(heard) && heard.said('wall', 'cold'),
  },
  {
    cause: 'thermostat',
    likelihood: 'less-likely',
    why: 'It runs but does not get cold enough.',
    source: 'practice',
    isTrue: runs,
  },
  {
    cause: 'catching-up',
    likelihood: 'possible',
    why: 'It has run for less than a day.',
    source: 'ohio',
    isTrue: (heard) => runs(heard) && heard.said('running-since', 'under-a-day'),
  },
  {
    cause: 'cold-surroundings',
    likelihood: 'possible',
    why: 'It stands in a cold room.',
    source: 'practice',
    isTrue: (heard) => heard.said('place', 'cold') && !runs(heard),
  },
];

const NOT_NARROWED = 'The phone check did not narrow it down.';

/** Taken along when a visit is due and nothing that was said points at a part or a person. */
const WIDE_RULES: readonly Rule[] = [
  {
    cause: 'starter',
    likelihood: 'possible',
    why: NOT_NARROWED,
    source: 'practice',
    isTrue: (heard, unit) => isRelay(unit) && !runs(heard),
  },
  {
    cause: 'inverter-board',
    likelihood: 'possible',
    why: NOT_NARROWED,
    source: 'practice',
    isTrue: (heard, unit) => isInverter(unit) && !runs(heard),
  },
  {
    cause: 'control-board',
    likelihood: 'possible',
    why: NOT_NARROWED,
    source: 'practice',
    isTrue: (heard) => !runs(heard),
  },
  {
    cause: 'thermostat',
    likelihood: 'possible',
    why: NOT_NARROWED,
    source: 'practice',
    isTrue: runs,
  },
  {
    cause: 'evaporator-fan',
    likelihood: 'possible',
    why: NOT_NARROWED,
    source: 'practice',
    isTrue: (heard, unit) => runs(heard) && unit.kind !== 'chest-freezer',
  },
];

/** What may be wrong, most likely first, each cause once. */
export function causesOf(heard: Heard, unit: CheckUnit): readonly LikelyCause[] {
  return ranked(RULES, heard, unit);
}

/** The same, and what a visit without a lead should be ready for. */
export function widestCauses(heard: Heard, unit: CheckUnit): readonly LikelyCause[] {
  return ranked([...RULES, ...WIDE_RULES], heard, unit);
}

function ranked(rules: readonly Rule[], heard: Heard, unit: CheckUnit): readonly LikelyCause[] {
  const strongest = new Map<CauseId, LikelyCause>();
  for (const likelihood of LIKELIHOODS) {
    for (const rule of rules) {
      if (rule.likelihood !== likelihood || strongest.has(rule.cause)) continue;
      if (!rule.isTrue(heard, unit)) continue;
      const { cause, why, source } = rule;
      strongest.set(cause, { cause, likelihood, why, source: SOURCES[source] });
    }
  }
  return [...strongest.values()];
}
