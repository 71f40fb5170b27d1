import { SOURCES } from './sources';

/** What ends the phone check at once, before anything is tried. */
export const DANGER_IDS = [
  'fire',
  'burning-smell',
  'downed-line',
  'generator-indoors',
  'open-neutral',
  'wet-unit',
  'standing-water',
  'medical-device',
  'burnt-plug',
] as const;
export type DangerId = (typeof DANGER_IDS)[number];

export interface Danger {
  readonly id: DangerId;
  /** What is wrong, in a few words. */
  readonly title: string;
  /** What the dispatcher says, in order; the first line is the one that cannot wait. */
  readonly stop: readonly string[];
  readonly whoToCall: string;
  readonly source: string;
}

const CALL_AGAIN = 'Call us again when you have been told that it is safe.';

export const DANGERS: Readonly<Record<DangerId, Danger>> = {
  fire: {
    id: 'fire',
    title: 'Smoke or fire',
    stop: [
      'Get everybody out now. Touch nothing, unplug nothing.',
      'Call 911 from outside and do not go back in.',
      CALL_AGAIN,
    ],
    whoToCall: '911',
    source: SOURCES.practice,
  },
  'burning-smell': {
    id: 'burning-smell',
    title: 'Burning smell',
    stop: [
      'Keep away from the unit and its plug.',
      'If the breaker box is dry and not beside the unit, switch the unit’s breaker off and leave it off.',
      'If you see smoke or the smell does not go, get everybody out and call 911.',
      'A technician looks at it before anybody switches it on again.',
    ],
    whoToCall: '911 if there is smoke or the smell stays',
    source: SOURCES.practice,
  },
  'downed-line': {
    id: 'downed-line',
    title: 'Power line down',
    stop: [
      'Stay at least 35 feet away from the line and from whatever it touches. Take it as live.',
      'Call 911, then the electric utility.',
      CALL_AGAIN,
    ],
    whoToCall: '911, then the electric utility',
    source: SOURCES.esfi,
  },
  'generator-indoors': {
    id: 'generator-indoors',
    title: 'Generator indoors or too near',
    stop: [
      'Everybody out into fresh air now. Its exhaust kills without a smell.',
      'If anybody has a headache, is dizzy or sick, call 911.',
      'It runs only outdoors, 20 feet or more from the house, exhaust pointing away; never in a garage, porch or carport.',
      'Do not go back in to switch it off; the fire department does that.',
      CALL_AGAIN,
    ],
    whoToCall: '911',
    source: SOURCES.cpsc,
  },
  'open-neutral': {
    id: 'open-neutral',
    title: 'Supply may be broken (open neutral)',
    stop: [
      'Plug nothing in and switch nothing on.',
      'The wires that feed the house may be damaged; outlets can carry far too much voltage.',
      'Call the electric utility or an electrician. It is not the appliance.',
      CALL_AGAIN,
    ],
    whoToCall: 'The electric utility or an electrician',
    source: SOURCES.openNeutral,
  },
  'wet-unit': {
    id: 'wet-unit',
    title: 'Water has touched the unit',
    stop: [
      'Do not touch the unit, its cord or its plug.',
      'It stays off until a qualified person has checked it, even when it looks dry.',
      'A technician comes for that.',
    ],
    whoToCall: 'Nobody else, as long as no water stands around it',
    source: SOURCES.nema,
  },
  'standing-water': {
    id: 'standing-water',
    title: 'Water stands around it',
    stop: [
      'Do not step into the water and do not touch anything electrical in that room.',
      'Call the electric utility or an electrician to switch the power off.',
      CALL_AGAIN,
    ],
    whoToCall: 'The electric utility or an electrician',
    source: SOURCES.nema,
  },
  'medical-device': {
    id: 'medical-device',
    title: 'Medical device without power',
    stop: [
      'That comes first. If the person is in trouble or the battery is running out, call 911.',
      'Call the supplier of the device about a battery or another place to be.',
      'We keep your call and send somebody for the unit.',
    ],
    whoToCall: '911, or the supplier of the device',
    source: SOURCES.practice,
  },
  'burnt-plug': {
    id: 'burnt-plug',
    title: 'Burnt or broken plug, cord or outlet',
    stop: [
      'Leave the unit unplugged and do not use that outlet again.',
      'An electrician has to see the outlet; a technician comes for the unit.',
    ],
    whoToCall: 'An electrician, for the outlet',
    source: SOURCES.practice,
  },
};
