import { hasPlug, type Heard, type Question } from './question';
import { SOURCES } from './sources';

/** Whether nothing shows that the unit gets power. */
const looksDead = (heard: Heard): boolean => heard.said('doing', 'dead', 'unsure');

/** Whether the plug was found to be out of reach, as behind a built-in unit. */
const plugOutOfReach = (heard: Heard): boolean => heard.said('outlet', 'cannot-reach');

const outletGivesNothing = (heard: Heard): boolean =>
  heard.said('outlet', 'dead', 'cannot-reach') && heard.said('gfci', 'no-change');

/** From the street to the plug: each step is tried once, by the customer, without a tool. */
export const SUPPLY_QUESTIONS: readonly Question[] = [
  {
    id: 'power',
    section: 'supply',
    ask: 'Is the power on in the rest of your home?',
    why: 'While the area is out there is nothing to repair; food advice is what helps.',
    source: SOURCES.ohio,
    answers: [
      { id: 'on', key: 'o', label: 'On' },
      {
        id: 'area-out',
        key: 'a',
        label: 'Out, the neighbours too',
        ends: { outcome: 'power-still-out', referTo: 'utility' },
      },
      {
        id: 'unsteady',
        key: 'u',
        label: 'It comes and goes',
        ends: { outcome: 'power-still-out', referTo: 'utility' },
      },
      {
        id: 'home-only',
        key: 'h',
        label: 'Out here, but the neighbours have it',
        ends: { outcome: 'referred', referTo: 'utility' },
      },
    ],
    isAsked: () => true,
  },
  {
    id: 'doing',
    section: 'supply',
    ask: 'What does the unit do now? Tell me without opening it.',
    why: 'A light or a sound means that power gets there, and saves half of the questions.',
    source: SOURCES.practice,
    caution: 'keep-shut',
    answers: [
      { id: 'dead', key: 'd', label: 'Nothing: no light, no sound' },
      { id: 'lit-silent', key: 'l', label: 'Light or display on, but silent' },
      { id: 'clicks', key: 'c', label: 'Hums or clicks and stops again' },
      { id: 'runs-warm', key: 'w', label: 'Runs but stays warm' },
      {
        id: 'runs-cold',
        key: 'r',
        label: 'Runs and gets cold',
        ends: { outcome: 'running-again' },
      },
      { id: 'unsure', key: 'u', label: 'Cannot tell' },
    ],
    isAsked: () => true,
  },
  {
    id: 'outlet',
    section: 'supply',
    ask: 'Take a lamp or a phone charger to the outlet that the unit uses. Does it work there as it should?',
    why: 'About two minutes, and it tells the outlet from the unit.',
    source: SOURCES.practice,
    caution: 'dry-hands',
    answers: [
      { id: 'works', key: 'w', label: 'Works' },
      { id: 'dead', key: 'd', label: 'Dead' },
      {
        id: 'odd',
        key: 'o',
        label: 'Lamp very bright, dim or flickering',
        ends: { danger: 'open-neutral', outcome: 'referred', referTo: 'utility' },
      },
      { id: 'cannot-reach', key: 'c', label: 'Plug or outlet out of reach' },
    ],
    isAsked: (heard, unit) => hasPlug(unit) && looksDead(heard),
  },
  {
    id: 'gfci',
    section: 'supply',
    ask: 'Unplug the unit if you can reach the plug. Is there an outlet with Test and Reset buttons near it, in the kitchen, garage, bath or basement? Press Reset once.',
    why: 'One tripped GFCI outlet can switch off others down the line.',
    source: SOURCES.gfci,
    caution: 'reset-once',
    answers: [
      { id: 'came-back', key: 'b', label: 'Power is back at the outlet' },
      { id: 'no-change', key: 'n', label: 'No such outlet, or no change' },
      {
        id: 'trips-unplugged',
        key: 't',
        label: 'Trips again, unit unplugged',
        ends: { outcome: 'referred', referTo: 'electrician' },
      },
      {
        id: 'trips-plugged',
        key: 'p',
        label: 'Trips again, plug out of reach',
        ends: { outcome: 'visit' },
      },
    ],
    isAsked: (heard) => heard.said('outlet', 'dead', 'cannot-reach'),
  },
  {
    id: 'breaker',
    section: 'supply',
    ask: 'Look at the breakers, on a dry floor, and take off no cover. Is the one for the unit off, or between on and off? Has anybody reset it already?',
    why: 'A tripped breaker is often all there is, and it may be reset once.',
    source: SOURCES.breaker,
    caution: 'no-panels',
    answers: [
      { id: 'all-on', key: 'a', label: 'All are on' },
      { id: 'tripped', key: 't', label: 'One is off; nobody has reset it' },
      { id: 'reset-holds', key: 'h', label: 'Already reset, and it holds' },
      {
        id: 'reset-tripped',
        key: 'x',
        label: 'Already reset, and it tripped again',
        ends: { outcome: 'visit' },
      },
      { id: 'cannot-get-there', key: 'c', label: 'Cannot get to it safely' },
    ],
    isAsked: (heard, unit) => (hasPlug(unit) ? outletGivesNothing(heard) : looksDead(heard)),
  },
  {
    id: 'breaker-reset',
    section: 'supply',
    ask: 'Unplug the unit first. Then push that breaker fully off, and on again. Once only. Does it hold?',
    why: 'Unplugged, so that it shows whether the wiring or the unit trips it.',
    source: SOURCES.breaker,
    caution: 'reset-once',
    answers: [
      { id: 'holds', key: 'h', label: 'It holds' },
      {
        id: 'trips-again',
        key: 't',
        label: 'It trips again: leave it off',
        ends: { outcome: 'referred', referTo: 'electrician' },
      },
      { id: 'could-not', key: 'c', label: 'Could not unplug or reach it' },
    ],
    isAsked: (heard, unit) => hasPlug(unit) && heard.said('breaker', 'tripped'),
  },
  {
    id: 'walk-in-reset',
    section: 'supply',
    ask: 'Push that breaker fully off, and on again. Once only. Does it hold?',
    why: 'The room is wired in, so a second trip means that somebody has to look at it.',
    source: SOURCES.breaker,
    caution: 'reset-once',
    answers: [
      { id: 'holds', key: 'h', label: 'It holds' },
      {
        id: 'trips-again',
        key: 't',
        label: 'It trips again: leave it off',
        ends: { outcome: 'visit' },
      },
      { id: 'could-not', key: 'c', label: 'Could not reach it' },
    ],
    isAsked: (heard, unit) => !hasPlug(unit) && heard.said('breaker', 'tripped'),
  },
  {
    id: 'other-outlet',
    section: 'supply',
    ask: 'Is there another outlet, one that you know works, within reach of the unit’s own cord? Leave it unplugged for now.',
    why: 'A dead outlet is for an electrician, but the food need not wait for one.',
    source: SOURCES.practice,
    caution: 'no-extension-cord',
    answers: [
      { id: 'yes', key: 'y', label: 'Yes' },
      { id: 'no', key: 'n', label: 'No', ends: { outcome: 'referred', referTo: 'electrician' } },
    ],
    isAsked: (heard) =>
      heard.said('outlet', 'dead') &&
      (heard.said('breaker', 'all-on', 'cannot-get-there') ||
        heard.said('breaker-reset', 'could-not')),
  },
  {
    id: 'plug',
    section: 'supply',
    ask: 'Was the plug all the way in? Pull it out and look: are plug, cord and outlet clean, nothing brown, melted or cracked?',
    why: 'Heat marks mean that it must not be used again.',
    source: SOURCES.practice,
    caution: 'dry-hands',
    answers: [
      { id: 'good', key: 'g', label: 'All in, all clean' },
      { id: 'was-loose', key: 'l', label: 'It was loose; clean' },
      {
        id: 'damaged',
        key: 'd',
        label: 'Brown, melted, cracked or frayed',
        ends: { danger: 'burnt-plug', outcome: 'visit' },
      },
      { id: 'cannot-see', key: 'c', label: 'Cannot see it' },
    ],
    isAsked: (heard, unit) => hasPlug(unit) && looksDead(heard) && !plugOutOfReach(heard),
  },
];
