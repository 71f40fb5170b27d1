import fc from 'fast-check';
import { UNIT_KINDS } from '@shared/domain/cold-unit';
import {
  answersOf,
  causeWords,
  concludeCall,
  nextOfCall,
  stepsOfCall,
  type UnitToCheck,
} from '@shared/domain/phone-check/call-check';
import { coolingHeard } from '@shared/domain/phone-check/cooling-heard';
import { likeliestOfUnits } from '@shared/domain/phone-check/likeliest-cause';
import { conclude, nextQuestion, stepsSoFar } from '@shared/domain/phone-check/phone-check';

const FRIDGE: UnitToCheck = { id: 'u1', kind: 'fridge-freezer', compressorStart: 'relay' };
const CHEST: UnitToCheck = { id: 'u2', kind: 'chest-freezer', compressorStart: 'unknown' };

type Answers = Record<string, string | number>;
const SAFE: Answers = {
  fire: 'no',
  line: 'no',
  generator: 'none',
  lights: 'no',
  water: 'no',
  device: 'no',
  power: 'on',
};

/** Answers the check of a call to its end; each choice is the answer's place, 0 where none is left. */
function play(units: readonly UnitToCheck[], choices: readonly number[], given: Answers = {}) {
  const answers: Answers = { ...given };
  const asked: string[] = [];
  for (;;) {
    const next = nextOfCall(answers, units);
    if (!next) return { answers, asked };
    if (asked.length > 200) throw new Error('It asks for ever');
    const possible = next.question.answers.map(({ id }) => id);
    answers[next.key] = possible[(choices[asked.length] ?? 0) % possible.length] ?? '';
    asked.push(next.key);
  }
}

const choices = fc.array(fc.nat(9), { minLength: 60, maxLength: 60 });
const someUnits = fc
  .array(fc.constantFrom(...UNIT_KINDS), { minLength: 1, maxLength: 4 })
  .map((kinds) =>
    kinds.map((kind, i): UnitToCheck => ({ id: `u${i}`, kind, compressorStart: 'unknown' })),
  );

describe('the phone check of a call with several units', () => {
  it('asks what concerns the whole home once, and smoke and water of each unit', () => {
    const { asked } = play([FRIDGE, CHEST], [], { ...SAFE, doing: 'runs-cold' });
    expect(asked.slice(0, 3)).toEqual(['fire@u2', 'water@u2', 'doing@u2']);
    expect(asked).not.toContain('power@u2');
  });

  it('of one unit is the check of that unit', () => {
    fc.assert(
      fc.property(choices, (row) => {
        const { answers } = play([FRIDGE], row);
        expect(nextQuestion(answers, FRIDGE)).toBeNull();
        expect(concludeCall(answers, [FRIDGE])).toMatchObject(conclude(answers, FRIDGE));
        expect(stepsOfCall(answers, [FRIDGE]).map(({ key, answer }) => [key, answer])).toEqual(
          stepsSoFar(answers, FRIDGE).map(({ question, answer }) => [question.id, answer]),
        );
      }),
    );
  });

  it('is a visit as soon as one unit needs one, with the parts and skills of all', () => {
    const running = { ...SAFE, doing: 'runs-cold' };
    const { answers } = play([FRIDGE, CHEST], [], {
      ...running,
      'fire@u2': 'no',
      'water@u2': 'no',
      'doing@u2': 'clicks',
      'start@u2': 'clicks',
    });
    const found = concludeCall(answers, [FRIDGE, CHEST])!;
    const chest = conclude(answersOf(answers, CHEST, [FRIDGE, CHEST]), CHEST);
    expect(found.ofUnits.map(({ outcome }) => outcome)).toEqual(['running-again', chest.outcome]);
    expect(found.outcome).toBe('visit');
    expect(found.parts).toEqual(chest.parts);
    expect(causeWords(found, ({ id }) => id)[0]).toMatch(/: u2$/);
  });

  it('stops for every unit at a danger of any, and when the area has no power', () => {
    const wet = { ...SAFE, doing: 'runs-cold', 'fire@u2': 'smoke' };
    expect(nextOfCall(wet, [FRIDGE, CHEST])).toBeNull();
    expect(concludeCall(wet, [FRIDGE, CHEST])).toMatchObject({
      outcome: 'referred',
      danger: { id: 'fire' },
    });
    const out = { ...SAFE, power: 'area-out' };
    expect(nextOfCall(out, [FRIDGE, CHEST])).toBeNull();
    expect(concludeCall(out, [FRIDGE, CHEST])?.outcome).toBe('power-still-out');
  });

  it('has no outcome while a unit is still to be asked about', () => {
    const answers = { ...SAFE, doing: 'runs-cold' };
    expect(concludeCall(answers, [FRIDGE, CHEST])?.outcome).toBeNull();
    expect(concludeCall(answers, [FRIDGE])?.outcome).toBe('running-again');
  });

  it('always ends, asks no question twice, and never forgets a danger', () => {
    fc.assert(
      fc.property(someUnits, choices, fc.boolean(), (units, row, isSafe) => {
        const { answers, asked } = play(units, row, isSafe ? SAFE : {});
        const found = concludeCall(answers, units)!;
        expect(new Set(asked).size).toBe(asked.length);
        expect(found.outcome).not.toBeNull();
        const dangers = found.ofUnits.flatMap(({ danger }) => danger ?? []);
        expect(found.danger).toEqual(dangers[0] ?? null);
        if (found.ofUnits.some(({ outcome }) => outcome === 'visit') && dangers.length === 0)
          expect(found.outcome).toBe('visit');
      }),
    );
  });
});

describe('likeliestOfUnits', () => {
  it('has one cause for each unit that the words of the call name', () => {
    const answers = { ...SAFE, doing: 'runs-warm', u2_doing: 'dead' };
    const found = concludeCall(answers, [FRIDGE, CHEST])!;
    const leading = found.ofUnits.map(({ causes }) => causes[0]?.cause);
    const told = likeliestOfUnits(causeWords(found, ({ id }) => `unit ${id}`));
    expect([...told].sort()).toEqual(leading.flatMap((cause) => cause ?? []).sort());
    expect(told.length).toBeGreaterThan(0);
  });

  it('tells two units of one name apart', () => {
    const start = 'The start relay, overload or run capacitor (likely): Freezer';
    const both = likeliestOfUnits([start, start, 'The thermostat (possible): Freezer']);
    expect(both).toHaveLength(2);
    expect(new Set(both).size).toBe(1);
    expect(likeliestOfUnits([])).toEqual([]);
  });
});

describe('coolingHeard', () => {
  it.each([
    [{ doing: 'runs-warm' }, 'partial'],
    [{ doing: 'dead' }, 'none'],
    [{ doing: 'dead', start: 'runs' }, null],
    [{ doing: 'lit-silent', start: 'clicks' }, 'none'],
    [{ doing: 'unsure' }, null],
    [{}, null],
  ])('of %j is %s', (answers, cooling) => {
    expect(coolingHeard(answers as Answers)).toBe(cooling);
  });
});
