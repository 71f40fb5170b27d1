import type { CompressorStart, UnitKind } from '../cold-unit';
import type { CautionId } from './cautions';
import type { DangerId } from './dangers';

/** What the phone check has to know of the unit before it starts. */
export interface CheckUnit {
  readonly kind: UnitKind;
  readonly compressorStart: CompressorStart;
}

/** What a call can come to on the phone. */
export const CHECK_OUTCOMES = ['running-again', 'referred', 'power-still-out', 'visit'] as const;
export type CheckOutcome = (typeof CHECK_OUTCOMES)[number];

export const REFERRALS = ['emergency', 'utility', 'electrician'] as const;
export type Referral = (typeof REFERRALS)[number];

/** How an answer ends the check. */
export interface Ending {
  readonly outcome: CheckOutcome;
  readonly danger?: DangerId;
  readonly referTo?: Referral;
}

export interface Answer {
  readonly id: string;
  readonly label: string;
  /** The key that gives this answer, one lower-case letter. */
  readonly key: string;
  readonly ends?: Ending;
}

export const QUESTION_IDS = [
  'fire',
  'line',
  'generator',
  'lights',
  'water',
  'device',
  'power',
  'doing',
  'outlet',
  'gfci',
  'breaker',
  'breaker-reset',
  'walk-in-reset',
  'other-outlet',
  'plug',
  'settings',
  'wait',
  'start',
  'fan',
  'sound',
  'wall',
  'running-since',
  'frost',
  'seal',
  'before',
  'place',
  'temperature',
] as const;
export type QuestionId = (typeof QUESTION_IDS)[number];

/** What has been said so far, as far as it still counts. */
export interface Heard {
  /** Whether the question was answered with one of these answers. */
  said(question: QuestionId, ...answers: readonly string[]): boolean;
  /** The number that was given, or null. */
  number(question: QuestionId): number | null;
}

export interface Question {
  readonly id: QuestionId;
  readonly section: 'safety' | 'supply' | 'settings' | 'restart' | 'listen' | 'history' | 'reading';
  /** What the dispatcher reads aloud. */
  readonly ask: string;
  /** Why it is asked, for the dispatcher and for a customer who wonders. */
  readonly why: string;
  readonly source: string;
  readonly answers: readonly Answer[];
  readonly caution?: CautionId;
  /** A step that takes this long; the screen runs a timer. */
  readonly timerSeconds?: number;
  /** The question also takes a number. */
  readonly number?: { readonly unit: 'F'; readonly min: number; readonly max: number };
  isAsked(heard: Heard, unit: CheckUnit): boolean;
}

/** A walk-in is wired in for good; everything else stands on a cord. */
export const hasPlug = (unit: CheckUnit): boolean => unit.kind !== 'walk-in';
