import type { CallState } from '../call-state';
import type { UnitKind } from '../cold-unit';
import { PARTS, SKILLS, type Part, type Skill } from '../skills';
import { adviceFor } from './advice';
import { causesOf, widestCauses } from './cause-rules';
import { CAUSES, type LikelyCause } from './causes';
import { DANGERS, type Danger } from './dangers';
import type {
  Answer,
  CheckOutcome,
  CheckUnit,
  Ending,
  Heard,
  Question,
  QuestionId,
  Referral,
} from './question';
import { SAFETY_QUESTIONS } from './safety-questions';
import type { Sourced } from './sources';
import { SUPPLY_QUESTIONS } from './supply-questions';
import { UNIT_QUESTIONS } from './unit-questions';

/** What was answered: the id of an answer, or a number where the question takes one. */
export type PhoneCheckAnswers = Readonly<Record<string, string | number>>;

/** Every question in the order in which it may be asked; each at most once. */
export const QUESTIONS: readonly Question[] = [
  ...SAFETY_QUESTIONS,
  ...SUPPLY_QUESTIONS,
  ...UNIT_QUESTIONS,
];

export interface Step {
  readonly question: Question;
  readonly answer: string | number;
}

export interface Conclusion {
  /** Set when the check was stopped for safety; its words come before anything else. */
  readonly danger: Danger | null;
  /** `null` while questions are left. */
  readonly outcome: CheckOutcome | null;
  readonly referTo: Referral | null;
  /** What it may be, most likely first; before the end, what it looks like so far. */
  readonly causes: readonly LikelyCause[];
  /** What a visit should have on the van. Empty when no visit is needed. */
  readonly parts: readonly Part[];
  readonly skills: readonly Skill[];
  readonly advice: readonly Sourced[];
}

/** The state that a call takes by each outcome. An area that is out is the utility's to repair. */
export const STATE_AFTER: Readonly<Record<CheckOutcome, CallState>> = {
  'running-again': 'running-again',
  referred: 'referred',
  'power-still-out': 'referred',
  visit: 'waiting',
};

export const OUTCOME_WORDS: Readonly<Record<CheckOutcome, string>> = {
  'running-again': 'Running again',
  referred: 'Referred',
  'power-still-out': 'Power still out: food advice, no visit',
  visit: 'Needs a visit',
};

/** The question to ask now, or null when the check has come to its end. */
export function nextQuestion(answers: PhoneCheckAnswers, unit: CheckUnit): Question | null {
  return walk(answers, unit).next;
}

/**
 * The questions that were asked and still count, in order. An answer to a question that a changed
 * answer has made needless is left out, here and everywhere else.
 */
export function stepsSoFar(answers: PhoneCheckAnswers, unit: CheckUnit): readonly Step[] {
  return walk(answers, unit).steps;
}

/** Whether the answer is one that the question knows. */
export function isAnswerTo(question: Question, answer: unknown): answer is string | number {
  return typeof answer === 'number'
    ? isReading(question, answer)
    : question.answers.some(({ id }) => id === answer);
}

/** What the answers come to so far. */
export function conclude(answers: PhoneCheckAnswers, unit: CheckUnit): Conclusion {
  const { heard, ending, next } = walk(answers, unit);
  const end = ending ?? (next === null ? lastWord(heard, unit) : null);
  const danger = end?.danger ?? null;
  const outcome = end?.outcome ?? null;
  const referTo = end?.referTo ?? null;

  const found = causesOf(heard, unit);
  const isVisit = outcome === 'visit';
  const isOpenQuestion = danger === null || danger === 'medical-device';
  const pointsNowhere = partsFor(found).length === 0 && likelySkills(found).size === 0;
  const causes = isVisit && isOpenQuestion && pointsNowhere ? widestCauses(heard, unit) : found;

  const mayVisit = outcome === null || isVisit;
  return {
    danger: danger === null ? null : DANGERS[danger],
    outcome,
    referTo,
    causes,
    parts: mayVisit ? partsFor(causes) : [],
    skills: mayVisit ? skillsFor(causes, unit) : [],
    advice: adviceFor(outcome, danger, referTo, heard, unit),
  };
}

interface Walk {
  readonly steps: readonly Step[];
  readonly heard: Heard;
  readonly next: Question | null;
  /** What the last answer ended the check with. */
  readonly ending: Ending | null;
}

/** Goes through the questions from the first one, so that a corrected answer changes what follows. */
function walk(answers: PhoneCheckAnswers, unit: CheckUnit): Walk {
  const steps: Step[] = [];
  const byQuestion = new Map<QuestionId, string | number>();
  const heard: Heard = {
    said: (question, ...wanted) => {
      const answer = byQuestion.get(question);
      return typeof answer === 'string' && wanted.includes(answer);
    },
    number: (question) => {
      const answer = byQuestion.get(question);
      return typeof answer === 'number' ? answer : null;
    },
  };

  for (const question of QUESTIONS) {
    if (!question.isAsked(heard, unit)) continue;
    const given = Object.hasOwn(answers, question.id) ? answers[question.id] : undefined;
    if (!isAnswerTo(question, given)) return { steps, heard, next: question, ending: null };
    steps.push({ question, answer: given });
    byQuestion.set(question.id, given);
    const ending = chosen(question, given)?.ends ?? null;
    if (ending) return { steps, heard, next: null, ending };
  }
  return { steps, heard, next: null, ending: null };
}

const chosen = (question: Question, answer: string | number): Answer | undefined =>
  question.answers.find(({ id }) => id === answer);

const isReading = ({ number }: Question, value: number): boolean =>
  number !== undefined && value >= number.min && value <= number.max;

/** With every question asked: a visit, unless the unit cools and only needs time. */
function lastWord(heard: Heard, unit: CheckUnit): Ending {
  return { outcome: coolsAgain(heard, unit) ? 'running-again' : 'visit' };
}

/**
 * A unit that runs, and either shows a reading at its limit or has run for less than a day with
 * every sign of cooling. The second is common practice, without a source.
 */
function coolsAgain(heard: Heard, unit: CheckUnit): boolean {
  if (!heard.said('doing', 'runs-warm') || heard.said('sound', 'click-hum', 'silent')) return false;
  const readingF = heard.number('temperature');
  if (readingF !== null && isColdEnough(unit.kind, readingF)) return true;
  return (
    heard.said('running-since', 'under-a-day') &&
    heard.said('sound', 'steady-hum') &&
    heard.said('wall', 'warm') &&
    heard.said('seal', 'tight') &&
    heard.said('before', 'fine') &&
    !heard.said('frost', 'yes') &&
    !heard.said('fan', 'no') &&
    !heard.said('settings', 'stuck')
  );
}

/**
 * Set-points and limits: refrigerator 40 F or below and freezer 0 F or below (USDA FSIS), cold
 * holding 41 F or below (FDA Food Code 3-501.16), medicine 36 to 46 F (FDA on insulin storage).
 */
function isColdEnough(kind: UnitKind, readingF: number): boolean {
  switch (kind) {
    case 'refrigerator':
    case 'fridge-freezer':
      return readingF <= 40;
    case 'upright-freezer':
    case 'chest-freezer':
      return readingF <= 0;
    case 'walk-in':
      return readingF <= 41;
    case 'medicine-fridge':
      return readingF >= 36 && readingF <= 46;
  }
}

/** Parts of the causes that are likely or possible, in the order of the parts list. */
function partsFor(causes: readonly LikelyCause[]): readonly Part[] {
  const wanted = new Set(
    causes
      .filter(({ likelihood }) => likelihood !== 'less-likely')
      .flatMap(({ cause }) => CAUSES[cause].parts),
  );
  return PARTS.filter((part) => wanted.has(part));
}

/** Only a likely cause asks for a skill: "possible" would send the few certified people everywhere. */
function likelySkills(causes: readonly LikelyCause[]): ReadonlySet<Skill> {
  return new Set(
    causes
      .filter(({ likelihood }) => likelihood === 'likely')
      .flatMap(({ cause }) => CAUSES[cause].skills),
  );
}

function skillsFor(causes: readonly LikelyCause[], unit: CheckUnit): readonly Skill[] {
  const wanted = likelySkills(causes);
  return SKILLS.filter(
    (skill) => wanted.has(skill) || (skill === 'commercial' && unit.kind === 'walk-in'),
  );
}
