import type { Ending, Question } from './question';
import { SOURCES } from './sources';

const stop = (
  danger: NonNullable<Ending['danger']>,
  outcome: Ending['outcome'],
  referTo?: Ending['referTo'],
): Ending => ({ danger, outcome, ...(referTo ? { referTo } : {}) });

const always = (): boolean => true;

/** Asked of everybody, before anything is tried. */
export const SAFETY_QUESTIONS: readonly Question[] = [
  {
    id: 'fire',
    section: 'safety',
    ask: 'Before anything else: do you see smoke or flames, or smell something burning, at the unit or its outlet?',
    why: 'A burning unit is for the fire department, not for us.',
    source: SOURCES.practice,
    caution: 'emergency',
    answers: [
      { id: 'no', key: 'n', label: 'No' },
      {
        id: 'smoke',
        key: 's',
        label: 'Smoke or flames',
        ends: stop('fire', 'referred', 'emergency'),
      },
      {
        id: 'burning-smell',
        key: 'b',
        label: 'Burning smell',
        ends: stop('burning-smell', 'visit'),
      },
    ],
    isAsked: always,
  },
  {
    id: 'line',
    section: 'safety',
    ask: 'Is a power line down or hanging low at or near the house?',
    why: 'A line on the ground may be live, and so may what it touches.',
    source: SOURCES.esfi,
    caution: 'emergency',
    answers: [
      { id: 'no', key: 'n', label: 'No' },
      { id: 'yes', key: 'y', label: 'Yes', ends: stop('downed-line', 'referred', 'emergency') },
    ],
    isAsked: always,
  },
  {
    id: 'generator',
    section: 'safety',
    ask: 'Is a generator running, and where does it stand?',
    why: 'Exhaust in the house kills about 85 people a year.',
    source: SOURCES.cpsc,
    caution: 'generator-outside',
    answers: [
      { id: 'none', key: 'n', label: 'No generator' },
      { id: 'outside', key: 'o', label: 'Outdoors, 20 feet or more away' },
      {
        id: 'inside-or-near',
        key: 'i',
        label: 'Indoors, garage, porch, carport or nearer than 20 feet',
        ends: stop('generator-indoors', 'referred', 'emergency'),
      },
    ],
    isAsked: always,
  },
  {
    id: 'lights',
    section: 'safety',
    ask: 'Are some lights much brighter than usual while others are dim, or did several things die at the same moment?',
    why: 'That points to a broken supply wire; anything plugged in may be destroyed.',
    source: SOURCES.openNeutral,
    answers: [
      { id: 'no', key: 'n', label: 'No' },
      { id: 'yes', key: 'y', label: 'Yes', ends: stop('open-neutral', 'referred', 'utility') },
      { id: 'cannot-tell', key: 'c', label: 'No light is on to tell' },
    ],
    isAsked: always,
  },
  {
    id: 'water',
    section: 'safety',
    ask: 'Has water touched the unit, its cord, plug or outlet, or does water stand around it?',
    why: 'Wet equipment must not be switched on before a qualified check.',
    source: SOURCES.nema,
    caution: 'wet-stays-off',
    answers: [
      { id: 'no', key: 'n', label: 'No, all dry' },
      { id: 'touched', key: 't', label: 'Water has touched it', ends: stop('wet-unit', 'visit') },
      {
        id: 'standing',
        key: 's',
        label: 'Water stands there now',
        ends: stop('standing-water', 'referred', 'electrician'),
      },
    ],
    isAsked: always,
  },
  {
    id: 'device',
    section: 'safety',
    ask: 'Does anybody there depend on a medical device that has no power now?',
    why: 'A person comes before food.',
    source: SOURCES.practice,
    caution: 'emergency',
    answers: [
      { id: 'no', key: 'n', label: 'No' },
      { id: 'yes', key: 'y', label: 'Yes', ends: stop('medical-device', 'visit') },
    ],
    isAsked: always,
  },
];
