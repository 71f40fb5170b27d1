import fc from 'fast-check';
import { CALL_STATES, mayFollow } from '@shared/domain/call-state';
import { COMPRESSOR_STARTS, UNIT_KINDS } from '@shared/domain/cold-unit';
import { CAUTIONS } from '@shared/domain/phone-check/cautions';
import { CAUSE_IDS } from '@shared/domain/phone-check/causes';
import { DANGER_IDS, DANGERS } from '@shared/domain/phone-check/dangers';
import {
  conclude,
  isAnswerTo,
  nextQuestion,
  type PhoneCheckAnswers,
  QUESTIONS,
  STATE_AFTER,
  stepsSoFar,
} from '@shared/domain/phone-check/phone-check';
import {
  CHECK_OUTCOMES,
  type CheckUnit,
  type Heard,
  QUESTION_IDS,
} from '@shared/domain/phone-check/question';
import { SAFETY_QUESTIONS } from '@shared/domain/phone-check/safety-questions';

const FRIDGE: CheckUnit = { kind: 'fridge-freezer', compressorStart: 'relay' };
const SAFE: PhoneCheckAnswers = {
  fire: 'no',
  line: 'no',
  generator: 'none',
  lights: 'no',
  water: 'no',
  device: 'no',
  power: 'on',
};

const units = fc.record({
  kind: fc.constantFrom(...UNIT_KINDS),
  compressorStart: fc.constantFrom(...COMPRESSOR_STARTS),
});

interface Played {
  readonly unit: CheckUnit;
  readonly answers: PhoneCheckAnswers;
  readonly asked: readonly string[];
}

/** Plays a whole check, choosing each answer by the next number of the row. */
function play(unit: CheckUnit, choices: readonly number[]): Played {
  const answers: Record<string, string | number> = {};
  const asked: string[] = [];
  for (;;) {
    const question = nextQuestion(answers, unit);
    if (!question) return { unit, answers, asked };
    if (asked.length > QUESTION_IDS.length) throw new Error('It asks for ever');
    const choice = choices[asked.length] ?? 0;
    const readings = question.number ? [question.number.min, 38, question.number.max] : [];
    const possible = [...question.answers.map(({ id }) => id), ...readings];
    answers[question.id] = possible[choice % possible.length] ?? '';
    asked.push(question.id);
  }
}

/** Half of the walks get past the safety questions, so that both halves of the check are walked. */
const walks = fc
  .record({
    unit: units,
    isSafe: fc.boolean(),
    choices: fc.array(fc.nat({ max: 59 }), { minLength: 27, maxLength: 27 }),
  })
  .map(({ unit, isSafe, choices }) =>
    play(unit, isSafe ? [...Array<number>(7).fill(0), ...choices] : choices),
  );

describe('any walk through the phone check', () => {
  it('ends in an outcome, and each question is asked at most once', () => {
    fc.assert(
      fc.property(walks, ({ unit, answers, asked }) => {
        const { outcome, advice, danger } = conclude(answers, unit);
        expect(CHECK_OUTCOMES).toContain(outcome);
        expect(new Set(asked).size).toBe(asked.length);
        expect(advice.length + (danger?.stop.length ?? 0)).toBeGreaterThan(0);
        expect(mayFollow('checking', STATE_AFTER[outcome ?? 'visit'])).toBe(true);
      }),
      { numRuns: 2_000 },
    );
  });

  it('is played here by rows of numbers that reach every question, outcome and danger', () => {
    const played = fc.sample(walks, { numRuns: 5_000, seed: 1 });
    const ends = played.map(({ answers, unit }) => conclude(answers, unit));
    expect(new Set(played.flatMap(({ asked }) => asked))).toEqual(new Set(QUESTION_IDS));
    expect(new Set(ends.map(({ outcome }) => outcome))).toEqual(new Set(CHECK_OUTCOMES));
    expect(new Set(ends.flatMap(({ danger }) => danger?.id ?? []))).toEqual(new Set(DANGER_IDS));
    expect(new Set(ends.flatMap(({ causes }) => causes.map(({ cause }) => cause)))).toEqual(
      new Set(CAUSE_IDS),
    );
  });

  it('begins with the safety questions, all of them, before anything is tried', () => {
    const safety = SAFETY_QUESTIONS.map(({ id }) => id);
    fc.assert(
      fc.property(walks, ({ asked }) => {
        const first = asked.slice(0, safety.length);
        expect(first).toEqual(safety.slice(0, first.length));
      }),
    );
  });

  it('offers a breaker or GFCI reset at most once each, and none after it tripped again', () => {
    fc.assert(
      fc.property(walks, ({ asked, answers }) => {
        const resets = asked.filter((id) => id === 'breaker-reset' || id === 'walk-in-reset');
        expect(resets.length).toBeLessThanOrEqual(1);
        if (answers['breaker'] === 'reset-tripped' || answers['breaker'] === 'reset-holds') {
          expect(resets).toEqual([]);
        }
        const trips = ['breaker-reset', 'walk-in-reset', 'gfci', 'start'].filter((id) =>
          String(answers[id] ?? '').startsWith('trips'),
        );
        if (trips.length > 0) expect(asked.at(-1)).toBe(trips[0]);
      }),
      { numRuns: 2_000 },
    );
  });

  it('stops at the first danger with words and somebody to call', () => {
    fc.assert(
      fc.property(walks, ({ unit, answers, asked }) => {
        const { danger, outcome } = conclude(answers, unit);
        if (!danger) return;
        expect(nextQuestion(answers, unit)).toBeNull();
        expect(danger.stop.length).toBeGreaterThan(0);
        expect(danger.whoToCall).not.toBe('');
        expect(outcome).not.toBe('running-again');
        const last = QUESTIONS.find(({ id }) => id === asked.at(-1));
        const answer = last?.answers.find(({ id }) => id === answers[last.id]);
        expect(answer?.ends?.danger).toBe(danger.id);
      }),
    );
  });

  it('names parts and skills for a visit only', () => {
    fc.assert(
      fc.property(walks, ({ unit, answers }) => {
        const { outcome, parts, skills } = conclude(answers, unit);
        if (outcome !== 'visit') expect([...parts, ...skills]).toEqual([]);
        if (outcome === 'visit' && unit.kind === 'walk-in') expect(skills).toContain('commercial');
      }),
    );
  });

  it('gives every visit without a danger something to bring or somebody to send', () => {
    fc.assert(
      fc.property(walks, ({ unit, answers }) => {
        const { outcome, danger, parts, skills } = conclude(answers, unit);
        if (outcome === 'visit' && !danger) expect([...parts, ...skills].length).toBeGreaterThan(0);
      }),
      { numRuns: 2_000 },
    );
  });

  it('never sends a relay for an inverter or an inverter board for a relay', () => {
    fc.assert(
      fc.property(walks, ({ unit, answers }) => {
        const { parts } = conclude(answers, unit);
        if (unit.compressorStart === 'inverter') expect(parts).not.toContain('start-relay');
        if (unit.compressorStart === 'relay') expect(parts).not.toContain('inverter-board');
      }),
    );
  });

  it('lets no answer to a question that no longer counts change anything', () => {
    fc.assert(
      fc.property(walks, walks, ({ unit, answers }, other) => {
        const kept = Object.fromEntries(
          stepsSoFar(answers, unit).map(({ question, answer }) => [question.id, answer]),
        );
        // The answers of another walk only fill in questions that this one never asked.
        const mixed = { ...other.answers, ...answers };
        expect(kept).toEqual(answers);
        expect(conclude(mixed, unit)).toEqual(conclude(answers, unit));
      }),
    );
  });

  it('takes no answer that the question does not know', () => {
    const unit = FRIDGE;
    expect(nextQuestion({ fire: 'perhaps' }, unit)?.id).toBe('fire');
    expect(nextQuestion({ fire: 3 }, unit)?.id).toBe('fire');
    const temperature = QUESTIONS.find(({ id }) => id === 'temperature');
    const takes = (answer: unknown) => temperature && isAnswerTo(temperature, answer);
    expect([38, -5.5, 'none'].map(takes)).toEqual([true, true, true]);
    expect([900, Number.NaN, 'warm', null, undefined, {}].map(takes)).toEqual(Array(6).fill(false));
    expect(nextQuestion(Object.create({ fire: 'no' }) as PhoneCheckAnswers, unit)?.id).toBe('fire');
  });
});

describe('the questions', () => {
  it('stand in the order of their list, each once', () => {
    expect(QUESTIONS.map(({ id }) => id)).toEqual([...QUESTION_IDS]);
  });

  it.each(QUESTIONS.map((question) => [question.id, question] as const))(
    '"%s" says why and who says so, and gives each answer a key of its own',
    (_id, question) => {
      expect(question.why).not.toBe('');
      expect(question.source).not.toBe('');
      const keys = question.answers.map(({ key }) => key);
      expect(new Set(keys).size).toBe(keys.length);
      keys.forEach((key) => expect(key).toMatch(/^[a-z]$/));
      const ids = question.answers.map(({ id }) => id);
      expect(new Set(ids).size).toBe(ids.length);
      if (question.caution) expect(CAUTIONS[question.caution].to).not.toBe('technician');
    },
  );

  it('ask only about answers that exist', () => {
    const wrong: string[] = [];
    const spy = (truth: boolean): Heard => ({
      said: (id, ...wanted) => {
        const known = QUESTIONS.find((question) => question.id === id)?.answers.map((a) => a.id);
        wanted.filter((w) => !known?.includes(w)).forEach((w) => wrong.push(`${id}:${w}`));
        return truth;
      },
      number: () => null,
    });
    for (const kind of UNIT_KINDS) {
      for (const question of QUESTIONS) {
        question.isAsked(spy(true), { kind, compressorStart: 'relay' });
        question.isAsked(spy(false), { kind, compressorStart: 'relay' });
      }
    }
    expect(wrong).toEqual([]);
  });

  it('time five minutes unplugged and ten minutes of start delay', () => {
    const seconds = Object.fromEntries(
      QUESTIONS.filter(({ timerSeconds }) => timerSeconds).map((q) => [q.id, q.timerSeconds]),
    );
    expect(seconds).toEqual({ wait: 300, start: 600 });
  });

  it('never ask a customer to measure, to take off a cover or to open the door', () => {
    for (const { ask } of QUESTIONS) {
      expect(ask).not.toMatch(/\b(meter|voltage|measure|ohm|probe|relay|screw)\b/i);
      expect(ask.replace(/take off no cover|taking anything off/i, '')).not.toMatch(
        /\b(cover|panel|take off|remove)\b/i,
      );
      expect(ask.replace(/(do not|without) open(ing)?( it| the door)?/i, '')).not.toMatch(
        /\bopen\b/i,
      );
    }
  });

  it('are never asked of a walk-in where they need a plug', () => {
    fc.assert(
      fc.property(walks, ({ unit, asked }) => {
        if (unit.kind !== 'walk-in') return;
        for (const id of ['outlet', 'gfci', 'breaker-reset', 'other-outlet', 'plug', 'wait']) {
          expect(asked).not.toContain(id);
        }
      }),
    );
  });
});

describe('each danger', () => {
  it.each([
    ['fire', 'smoke', 'fire', 'referred'],
    ['fire', 'burning-smell', 'burning-smell', 'visit'],
    ['line', 'yes', 'downed-line', 'referred'],
    ['generator', 'inside-or-near', 'generator-indoors', 'referred'],
    ['lights', 'yes', 'open-neutral', 'referred'],
    ['water', 'touched', 'wet-unit', 'visit'],
    ['water', 'standing', 'standing-water', 'referred'],
    ['device', 'yes', 'medical-device', 'visit'],
  ])('%s=%s stops with %s and comes to %s', (question, answer, danger, outcome) => {
    const result = conclude({ ...SAFE, [question]: answer }, FRIDGE);
    expect(result).toMatchObject({ outcome, danger: { id: danger } });
  });

  it('says the published distances: 35 feet from a line, 20 feet for a generator', () => {
    // ESFI, downed power lines; CPSC 2020-2022, generators.
    expect(DANGERS['downed-line'].stop.join(' ')).toContain('35 feet');
    expect(DANGERS['generator-indoors'].stop.join(' ')).toContain('20 feet');
  });

  it('tells nobody in a burning house about food', () => {
    expect(conclude({ fire: 'smoke' }, FRIDGE).advice).toEqual([]);
  });

  it('plugs nothing in where lamps burn too bright', () => {
    const answers = { ...SAFE, doing: 'dead', outlet: 'odd' };
    expect(conclude(answers, FRIDGE).danger?.stop[0]).toMatch(/^Plug nothing in/);
  });

  it('sends an electrically skilled technician to a wet unit, which stays off', () => {
    const result = conclude({ ...SAFE, water: 'touched' }, FRIDGE);
    expect(result.skills).toEqual(['electrical']);
    expect(result.danger?.stop.join(' ')).toMatch(/stays off/);
  });
});

describe('a path through the check', () => {
  const end = (more: PhoneCheckAnswers, unit = FRIDGE) => {
    const answers = { ...SAFE, ...more };
    expect(nextQuestion(answers, unit)).toBeNull();
    return conclude(answers, unit);
  };
  const causes = (result: ReturnType<typeof conclude>) =>
    result.causes.map(({ cause, likelihood }) => `${likelihood} ${cause}`);

  it('gives food advice and no visit while the area is out', () => {
    const result = end({ power: 'area-out' });
    expect(result).toMatchObject({ outcome: 'power-still-out', parts: [], skills: [] });
    expect(result.advice.map(({ words }) => words).join(' ')).toContain('four hours');
  });

  it('settles a tripped breaker by phone', () => {
    const result = end({
      doing: 'dead',
      outlet: 'dead',
      gfci: 'no-change',
      breaker: 'tripped',
      'breaker-reset': 'holds',
      plug: 'good',
      wait: 'done',
      start: 'runs',
    });
    expect(result.outcome).toBe('running-again');
    expect(causes(result)).toContain('likely tripped-breaker');
  });

  it('refers a breaker that trips with the unit unplugged to an electrician', () => {
    const result = end({
      doing: 'dead',
      outlet: 'dead',
      gfci: 'no-change',
      breaker: 'tripped',
      'breaker-reset': 'trips-again',
    });
    expect(result).toMatchObject({ outcome: 'referred', referTo: 'electrician' });
    expect(causes(result)).toContain('likely wiring-fault');
  });

  it('sends an electrically skilled technician when the unit itself trips the breaker', () => {
    const result = end({
      doing: 'dead',
      outlet: 'dead',
      gfci: 'came-back',
      plug: 'good',
      wait: 'done',
      start: 'trips',
    });
    expect(result).toMatchObject({ outcome: 'visit', skills: ['electrical'] });
    expect(result.advice.map(({ words }) => words).join(' ')).toContain('Do not reset it');
  });

  it('lets a dead outlet be passed by with another one, and says to have it seen to', () => {
    const result = end({
      doing: 'dead',
      outlet: 'dead',
      gfci: 'no-change',
      breaker: 'all-on',
      'other-outlet': 'yes',
      plug: 'good',
      wait: 'done',
      start: 'runs',
    });
    expect(result.outcome).toBe('running-again');
    expect(result.advice.map(({ words }) => words).join(' ')).toContain('electrician');
  });

  it('takes a burnt plug as a stop', () => {
    const result = end({ doing: 'dead', outlet: 'works', plug: 'damaged' });
    expect(result).toMatchObject({ outcome: 'visit', danger: { id: 'burnt-plug' } });
    expect(result.parts).toContain('power-cord');
  });

  const clicking = {
    doing: 'clicks',
    wait: 'done',
    start: 'clicks',
    fan: 'yes',
    sound: 'click-hum',
    before: 'fine',
    place: 'no',
    temperature: 'none',
  };

  it('brings starter parts to a relay unit that clicks, and no certified person for a guess', () => {
    const result = end(clicking);
    expect(result).toMatchObject({
      outcome: 'visit',
      parts: ['start-relay', 'overload', 'run-capacitor'],
      skills: [],
    });
    expect(causes(result)).toEqual(['likely starter', 'possible compressor']);
  });

  it('brings an inverter board to an inverter unit that does the same', () => {
    const result = end(clicking, { kind: 'fridge-freezer', compressorStart: 'inverter' });
    expect(result).toMatchObject({ parts: ['inverter-board'], skills: ['electrical'] });
  });

  it('brings both where nobody knows how it starts', () => {
    const result = end(clicking, { kind: 'fridge-freezer', compressorStart: 'unknown' });
    expect(result.parts).toEqual(['start-relay', 'overload', 'run-capacitor', 'inverter-board']);
  });

  it('suspects the control board when it is lit and all silent, and not when the fan turns', () => {
    const lit = {
      doing: 'lit-silent',
      settings: 'normal',
      wait: 'done',
      start: 'lit-silent',
      before: 'fine',
      place: 'no',
      temperature: 'none',
    };
    expect(causes(end({ ...lit, fan: 'no', sound: 'silent' }))[0]).toBe('likely control-board');
    const fanTurns = end({ ...lit, fan: 'yes', sound: 'silent' });
    expect(causes(fanTurns)[0]).toBe('likely starter');
    expect(fanTurns.parts).not.toContain('control-board');
  });

  const warm = {
    doing: 'runs-warm',
    settings: 'normal',
    fan: 'yes',
    sound: 'steady-hum',
    wall: 'warm',
    'running-since': 'under-a-day',
    frost: 'no',
    seal: 'tight',
    before: 'fine',
    place: 'no',
    temperature: 'none',
  };

  it('gives a unit that cools time to catch up', () => {
    expect(end(warm).outcome).toBe('running-again');
    expect(end({ ...warm, 'running-since': 'a-day-or-more' }).outcome).toBe('visit');
    expect(end({ ...warm, wall: 'cold' }).outcome).toBe('visit');
    expect(end({ ...warm, frost: 'yes' }).parts).toContain('defrost-heater');
  });

  it('brings nothing to start a compressor to a unit that runs', () => {
    const result = end({ ...warm, wall: 'cold' });
    expect(result.parts).toEqual(['evaporator-fan', 'thermostat']);
    expect(causes(result)).toContain('possible sealed-system');
  });

  it('asks for certification when it runs, stays cool outside and was weak before', () => {
    const result = end({ ...warm, wall: 'cold', before: 'weak' });
    expect(result).toMatchObject({ outcome: 'visit', skills: ['sealed-system'] });
  });

  // USDA FSIS: refrigerator 40 F or below, freezer 0 F or below. FDA Food Code 3-501.16: 41 F.
  it.each([
    ['refrigerator', 40, 'running-again'],
    ['refrigerator', 41, 'visit'],
    ['chest-freezer', 0, 'running-again'],
    ['chest-freezer', 5, 'visit'],
    ['walk-in', 41, 'running-again'],
    ['walk-in', 42, 'visit'],
    ['medicine-fridge', 46, 'running-again'],
    ['medicine-fridge', 35, 'visit'],
  ] as const)('believes a reading: %s at %i F is %s', (kind, temperature, outcome) => {
    const answers = { ...warm, 'running-since': 'a-day-or-more', temperature };
    expect(end(answers, { kind, compressorStart: 'relay' }).outcome).toBe(outcome);
  });
});

describe('the words', () => {
  const said = (unit: CheckUnit, answers: PhoneCheckAnswers) =>
    conclude(answers, unit).advice.map(({ words }) => words);

  it('never call food safe or spoiled, and never invite tasting', () => {
    fc.assert(
      fc.property(walks, ({ unit, answers }) => {
        for (const words of said(unit, answers)) {
          expect(words).not.toMatch(/\b(is safe to eat|food is safe|spoiled|guaranteed)\b/i);
          expect(words.replace(/never taste or smell/i, '')).not.toMatch(/\b(taste|smell)\b/i);
        }
      }),
    );
  });

  it('send medicine to the pharmacist and never to the bin', () => {
    const words = said({ kind: 'medicine-fridge', compressorStart: 'unknown' }, { power: 'on' });
    expect(words).toEqual([]);
    const atEnd = said(
      { kind: 'medicine-fridge', compressorStart: 'unknown' },
      { ...SAFE, power: 'area-out' },
    ).join(' ');
    expect(atEnd).toContain('pharmacist');
    expect(atEnd).not.toMatch(/throw/i);
  });

  it('carry a source with every caution, danger and piece of advice', () => {
    const sources = [
      ...Object.values(CAUTIONS).map(({ source }) => source),
      ...Object.values(DANGERS).map(({ source }) => source),
      ...UNIT_KINDS.flatMap((kind) =>
        conclude({ ...SAFE, power: 'area-out' }, { kind, compressorStart: 'relay' }).advice.map(
          ({ source }) => source,
        ),
      ),
    ];
    sources.forEach((source) => expect(source.length).toBeGreaterThan(5));
  });

  it('lead every outcome to a state of the call', () => {
    for (const outcome of CHECK_OUTCOMES) expect(CALL_STATES).toContain(STATE_AFTER[outcome]);
  });
});
