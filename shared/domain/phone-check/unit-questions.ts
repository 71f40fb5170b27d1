import { hasPlug, type CheckUnit, type Heard, type Question } from './question';
import { SOURCES } from './sources';

/** Long enough for electronics to forget and for the compressor's pressures to even out. */
const UNPLUGGED_SECONDS = 5 * 60;

/** Many controls hold the compressor back for five to ten minutes after power returns. */
const START_DELAY_SECONDS = 10 * 60;

const runsWarm = (heard: Heard): boolean => heard.said('doing', 'runs-warm');

/** Whether something was changed that could have started it. */
const hasBeenPoweredAnew = (heard: Heard): boolean =>
  heard.said('wait', 'done') ||
  heard.said('settings', 'was-off') ||
  heard.said('gfci', 'came-back') ||
  heard.said('breaker', 'reset-holds') ||
  heard.said('breaker-reset', 'holds') ||
  heard.said('walk-in-reset', 'holds');

const maybeFrosts = (unit: CheckUnit): boolean =>
  unit.kind === 'refrigerator' || unit.kind === 'fridge-freezer' || unit.kind === 'upright-freezer';

const holdsFrozen = (unit: CheckUnit): boolean =>
  unit.kind === 'fridge-freezer' ||
  unit.kind === 'upright-freezer' ||
  unit.kind === 'chest-freezer';

/** The unit itself: set right, start afresh, listen, remember, read. */
export const UNIT_QUESTIONS: readonly Question[] = [
  {
    id: 'settings',
    section: 'settings',
    ask: 'Does the display say demo, showroom, cooling off or off, or does the dial stand at 0 or off? Set it right if you know how.',
    why: 'A power cut can leave a unit lit but told not to cool.',
    source: SOURCES.practice,
    answers: [
      { id: 'normal', key: 'n', label: 'Normal' },
      { id: 'was-off', key: 'o', label: 'It was off or in demo; set right now' },
      { id: 'stuck', key: 's', label: 'It stays in demo or off' },
      { id: 'cannot-read', key: 'c', label: 'No display, or cannot tell' },
    ],
    isAsked: (heard) => heard.said('doing', 'lit-silent', 'runs-warm', 'unsure'),
  },
  {
    id: 'wait',
    section: 'restart',
    ask: 'Unplug the unit, or leave it unplugged, for five minutes. The timer runs; I stay on the line or call you back.',
    why: 'Electronics that hang start afresh, and a hot starter and its pressures settle.',
    source: SOURCES.startDelay,
    caution: 'dry-hands',
    timerSeconds: UNPLUGGED_SECONDS,
    answers: [
      { id: 'done', key: 'd', label: 'Five minutes are over' },
      { id: 'cannot', key: 'c', label: 'The plug is out of reach' },
    ],
    isAsked: (heard, unit) =>
      hasPlug(unit) &&
      !runsWarm(heard) &&
      !heard.said('settings', 'was-off') &&
      !heard.said('outlet', 'cannot-reach'),
  },
  {
    id: 'start',
    section: 'restart',
    ask: 'Plug it in if it is out, keep the door shut and give it ten minutes. What does it do then?',
    why: 'Many units hold the compressor back for five to ten minutes; judging sooner is guessing.',
    source: SOURCES.startDelay,
    caution: 'keep-shut',
    timerSeconds: START_DELAY_SECONDS,
    answers: [
      { id: 'runs', key: 'r', label: 'It runs', ends: { outcome: 'running-again' } },
      { id: 'dead', key: 'd', label: 'Nothing: no light, no sound' },
      { id: 'lit-silent', key: 'l', label: 'Light or display, but silent' },
      { id: 'clicks', key: 'c', label: 'Hums or clicks and stops again' },
      {
        id: 'trips',
        key: 't',
        label: 'Breaker or GFCI trips: unplug it, leave both',
        ends: { outcome: 'visit' },
      },
    ],
    isAsked: (heard) => hasBeenPoweredAnew(heard) && !runsWarm(heard),
  },
  {
    id: 'fan',
    section: 'listen',
    ask: 'Without moving the unit or taking anything off: do you hear a fan or feel air low down at the back or the front grille?',
    why: 'That fan shares the compressor’s circuit: if it turns while the compressor is silent, the main board is not to blame.',
    source: SOURCES.practice,
    caution: 'no-panels',
    answers: [
      { id: 'yes', key: 'y', label: 'Yes' },
      { id: 'no', key: 'n', label: 'No' },
      { id: 'unsure', key: 'u', label: 'Cannot tell' },
    ],
    isAsked: () => true,
  },
  {
    id: 'sound',
    section: 'listen',
    ask: 'Listen at the back for a minute or two. What comes from the compressor?',
    why: 'A hum and a click every few minutes is a starter that tries.',
    source: SOURCES.starter,
    answers: [
      { id: 'click-hum', key: 'c', label: 'Hum, click, quiet, again' },
      { id: 'steady-hum', key: 'h', label: 'A steady hum' },
      { id: 'silent', key: 's', label: 'Nothing' },
      { id: 'unsure', key: 'u', label: 'Cannot tell' },
    ],
    isAsked: () => true,
  },
  {
    id: 'wall',
    section: 'listen',
    ask: 'With dry hands, touch the outside of its side walls. Are they warm?',
    why: 'Warm walls mean that the compressor pumps heat; cold ones that it does not.',
    source: SOURCES.practice,
    caution: 'dry-hands',
    answers: [
      { id: 'warm', key: 'w', label: 'Warm' },
      { id: 'cold', key: 'c', label: 'No warmer than the room' },
      { id: 'unsure', key: 'u', label: 'Cannot tell' },
    ],
    isAsked: (heard, unit) =>
      hasPlug(unit) && (runsWarm(heard) || heard.said('sound', 'steady-hum')),
  },
  {
    id: 'running-since',
    section: 'history',
    ask: 'How long has it been running since the power came back?',
    why: 'A warm unit takes up to a day to get cold again.',
    source: SOURCES.ohio,
    answers: [
      { id: 'under-a-day', key: 'l', label: 'Less than a day' },
      { id: 'a-day-or-more', key: 'm', label: 'A day or more' },
      { id: 'unsure', key: 'u', label: 'Cannot tell' },
    ],
    isAsked: runsWarm,
  },
  {
    id: 'frost',
    section: 'history',
    ask: 'When you last looked inside, was there thick frost on the back wall? Do not open it now.',
    why: 'Frost stops the cold air.',
    source: SOURCES.practice,
    caution: 'keep-shut',
    answers: [
      { id: 'yes', key: 'y', label: 'Yes' },
      { id: 'no', key: 'n', label: 'No' },
      { id: 'unsure', key: 'u', label: 'Did not look' },
    ],
    isAsked: (heard, unit) => runsWarm(heard) && maybeFrosts(unit),
  },
  {
    id: 'seal',
    section: 'history',
    ask: 'From outside: does the door or lid sit tight all around?',
    why: 'A gap lets in more warmth than the unit can carry away.',
    source: SOURCES.practice,
    answers: [
      { id: 'tight', key: 't', label: 'Tight' },
      { id: 'gap', key: 'g', label: 'There is a gap' },
      { id: 'unsure', key: 'u', label: 'Cannot tell' },
    ],
    isAsked: runsWarm,
  },
  {
    id: 'before',
    section: 'history',
    ask: 'Before the storm, was it cold and quiet as always, or already noisy or too warm?',
    why: 'A unit that was weak before is usually a worn part, not the storm.',
    source: SOURCES.practice,
    answers: [
      { id: 'fine', key: 'f', label: 'As always' },
      { id: 'weak', key: 'w', label: 'Already noisy or warm' },
      { id: 'unsure', key: 'u', label: 'Cannot tell' },
    ],
    isAsked: () => true,
  },
  {
    id: 'place',
    section: 'history',
    ask: 'Does it stand in a garage, shed or porch that is colder than about 50 degrees?',
    why: 'Units in cold rooms sometimes do not restart until the room is warmer.',
    source: SOURCES.practice,
    answers: [
      { id: 'no', key: 'n', label: 'No' },
      { id: 'cold', key: 'y', label: 'Yes' },
    ],
    isAsked: (_heard, unit) => holdsFrozen(unit),
  },
  {
    id: 'temperature',
    section: 'reading',
    ask: 'If there is a thermometer or a display that you can read without opening the door, what does it say? For a refrigerator with a freezer, the refrigerator part.',
    why: 'A reading beats every guess. It is not worth opening the door for.',
    source: SOURCES.fsis,
    caution: 'keep-shut',
    number: { unit: 'F', min: -60, max: 130 },
    answers: [{ id: 'none', key: 'n', label: 'Nothing to read' }],
    isAsked: () => true,
  },
];
