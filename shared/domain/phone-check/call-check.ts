import { PARTS, SKILLS } from '../skills';
import { CAUSES, LIKELIHOOD_WORDS, LIKELIHOODS } from './causes';
import {
  conclude,
  nextQuestion,
  stepsSoFar,
  type Conclusion,
  type PhoneCheckAnswers,
  type Step,
} from './phone-check';
import type { CheckOutcome, CheckUnit, Question, QuestionId } from './question';
import type { Sourced } from './sources';

/** A unit of a call that is being checked. */
export interface UnitToCheck extends CheckUnit {
  readonly id: string;
}

/**
 * Asked once for the whole home: what would stop every check, and whether the power is on. Smoke and
 * water are asked of each unit, since one may be wet and another dry.
 */
const ASKED_ONCE: ReadonlySet<string> = new Set<QuestionId>([
  'line',
  'generator',
  'lights',
  'device',
  'power',
]);

/** Under which name an answer is kept: the first unit's, and what is asked once, under the question's. */
export function answerKey(question: QuestionId, unit: UnitToCheck, first: UnitToCheck): string {
  return unit.id === first.id || ASKED_ONCE.has(question) ? question : `${question}@${unit.id}`;
}

/** The answers as the check of one unit reads them. */
export function answersOf(
  answers: PhoneCheckAnswers,
  unit: UnitToCheck,
  units: readonly UnitToCheck[],
): PhoneCheckAnswers {
  if (unit.id === units[0]?.id) return answers;
  const own: Record<string, string | number> = {};
  for (const [key, answer] of Object.entries(answers)) {
    const [question = '', of] = key.split('@');
    if (of === unit.id || (of === undefined && ASKED_ONCE.has(question))) own[question] = answer;
  }
  return own;
}

export interface UnitStep extends Step {
  readonly unit: UnitToCheck;
  readonly key: string;
}

/** What to ask now, and of which unit; null when the check of the call has come to its end. */
export function nextOfCall(
  answers: PhoneCheckAnswers,
  units: readonly UnitToCheck[],
): { readonly unit: UnitToCheck; readonly question: Question; readonly key: string } | null {
  const [first] = units;
  if (!first) return null;
  for (const unit of units) {
    const own = answersOf(answers, unit, units);
    const question = nextQuestion(own, unit);
    if (question) return { unit, question, key: answerKey(question.id, unit, first) };
    if (endsAll(own, unit)) return null;
  }
  return null;
}

/** The steps of all units in their order; what was asked once stands with the first. */
export function stepsOfCall(
  answers: PhoneCheckAnswers,
  units: readonly UnitToCheck[],
): readonly UnitStep[] {
  const [first] = units;
  if (!first) return [];
  const steps: UnitStep[] = [];
  for (const unit of units) {
    const own = answersOf(answers, unit, units);
    for (const step of stepsSoFar(own, unit)) {
      if (unit !== first && ASKED_ONCE.has(step.question.id)) continue;
      steps.push({ ...step, unit, key: answerKey(step.question.id, unit, first) });
    }
    if (nextQuestion(own, unit) !== null || endsAll(own, unit)) break;
  }
  return steps;
}

export interface UnitConclusion extends Conclusion {
  readonly unit: UnitToCheck;
}

export interface CallConclusion extends Conclusion {
  /** What each unit has come to, as far as it was asked about. */
  readonly ofUnits: readonly UnitConclusion[];
}

/**
 * What the answers about all units come to: a danger before anything else, then the outcome that asks
 * for most. One unit that needs a visit is a visit, which brings the parts and skills of all.
 */
export function concludeCall(
  answers: PhoneCheckAnswers,
  units: readonly UnitToCheck[],
): CallConclusion | null {
  const ofUnits: UnitConclusion[] = [];
  let stopped: UnitConclusion | null = null;
  for (const unit of units) {
    const own = answersOf(answers, unit, units);
    const found = { ...conclude(own, unit), unit };
    ofUnits.push(found);
    if (!endsAll(own, unit)) continue;
    stopped = found;
    break;
  }
  const [first] = ofUnits;
  if (!first) return null;
  const isOver = nextOfCall(answers, units) === null;
  const leading = stopped ?? mostNeeded(ofUnits) ?? first;
  const outcome: CheckOutcome | null = isOver ? leading.outcome : null;
  const mayVisit = outcome === null || outcome === 'visit';
  return {
    danger: stopped?.danger ?? null,
    outcome,
    referTo: isOver ? leading.referTo : null,
    causes: ofUnits.flatMap(({ causes }) => causes),
    parts: mayVisit ? PARTS.filter((part) => ofUnits.some((one) => one.parts.includes(part))) : [],
    skills: mayVisit
      ? SKILLS.filter((skill) => ofUnits.some((one) => one.skills.includes(skill)))
      : [],
    advice: distinct(ofUnits.flatMap(({ advice }) => advice)),
    ofUnits,
  };
}

/** The likely causes in words, likeliest first; each with its unit's name where there is more than one. */
export const causeWords = (
  { ofUnits }: CallConclusion,
  nameOf: (unit: UnitToCheck) => string,
): readonly string[] =>
  ofUnits
    .flatMap(({ unit, causes }) => causes.map((one) => ({ ...one, unit })))
    .sort((a, b) => LIKELIHOODS.indexOf(a.likelihood) - LIKELIHOODS.indexOf(b.likelihood))
    .map(({ cause, likelihood, unit }) => {
      const words = `${CAUSES[cause].words} (${LIKELIHOOD_WORDS[likelihood]})`;
      return ofUnits.length > 1 ? `${words}: ${nameOf(unit)}` : words;
    });

/** A danger ends the check of every unit, and so does what was asked once for the whole home. */
function endsAll(own: PhoneCheckAnswers, unit: UnitToCheck): boolean {
  const { danger, outcome } = conclude(own, unit);
  if (danger !== null) return true;
  const last = stepsSoFar(own, unit).at(-1);
  return outcome !== null && last !== undefined && ASKED_ONCE.has(last.question.id);
}

const NEED: Readonly<Record<CheckOutcome, number>> = {
  visit: 3,
  referred: 2,
  'power-still-out': 1,
  'running-again': 0,
};

const mostNeeded = (conclusions: readonly UnitConclusion[]): UnitConclusion | undefined =>
  [...conclusions]
    .filter(({ outcome }) => outcome !== null)
    .sort((a, b) => NEED[b.outcome!] - NEED[a.outcome!])[0];

const distinct = (advice: readonly Sourced[]): readonly Sourced[] => [
  ...new Map(advice.map((one) => [one.words, one])).values(),
];
