import type { PlanDto } from '@shared/contract/routes';
import type {
  CheapestPlace,
  Relaxation,
  WhyUnplanned,
} from '@shared/domain/planner/explain-unplanned';
import type { UnassignedJob } from '@shared/domain/planner/problem';
import { PART_WORDS, PARTS, type Part, type Skill } from '@shared/domain/skills';
import { minutesInWords } from '@shared/domain/urgency';
import { wallClock } from '../texts/text-hours';
import type { KeptStop } from './kept-stops';

export interface Names {
  /** A technician's name, by id. */
  readonly nameOf: (technicianId: string) => string;
  /** IANA name of the zone in which people read times. */
  readonly zone: string;
}

const HOLDERS: Readonly<Record<Skill, string>> = {
  electrical: 'for electrical work',
  'sealed-system': 'certified for sealed systems',
  commercial: 'for commercial units',
};

export const KEPT_WORDS: Readonly<Record<KeptStop, string>> = {
  soon: 'Kept: it begins soon, and the automatic mode moves nothing so near.',
  'changes-used-up': 'Kept: the changes of this hour for this technician are used up.',
};

/** Why a call is on no route, with what stands in its way. */
export function unplannedWords(
  left: UnassignedJob,
  why: WhyUnplanned | undefined,
  names: Names,
): Pick<PlanDto['unplanned'][number], 'words' | 'help'> {
  const words = sentence(left.because);
  const cheapest = left.reason === 'capacity' ? why?.cheapest : null;
  const help = (why?.helps ?? []).map((one) => helpWords(one, names));
  return {
    words: cheapest ? `${words} ${cheapestWords(cheapest, names)}` : words,
    ...(help.length > 0 ? { help } : {}),
  };
}

/** The planner knows parts by their names alone. */
const sentence = (words: string): string =>
  words.replace(/[a-z]+(-[a-z]+)*/g, (word) => partWords(word));

const partWords = (name: string): string =>
  (PARTS as readonly string[]).includes(name) ? PART_WORDS[name as Part] : name;

function cheapestWords(place: CheapestPlace, { nameOf, zone }: Names): string {
  const costs = [
    ...(place.othersLost >= 1 ? [`${dollars(place.othersLost)} of others lost`] : []),
    ...(place.lateness >= 1 ? ['a promised window missed'] : []),
    ...(place.overtimeMinutes >= 1 ? [`${minutesInWords(place.overtimeMinutes)} of overtime`] : []),
    ...(place.driveMinutes >= 1 ? [`${minutesInWords(place.driveMinutes)} of driving`] : []),
  ];
  const where = `${at(place.start, zone)} with ${nameOf(place.technician)}`;
  if (place.dearer <= 0) return `There may be room: ${where}. Propose again with a longer search.`;
  const list = costs.length > 0 ? `: ${costs.join(', ')}` : '';
  return `Its cheapest place, ${where}, costs more than leaving it${list}.`;
}

/** "Any technician certified for sealed systems before 4:10 pm (from the place of Theo Larkspur: 3:20 pm)". */
function helpWords(help: Relaxation, { nameOf, zone }: Names): string {
  const name = nameOf(help.technician);
  const until = help.before === null ? '' : ` before ${at(help.before, zone)}`;
  const there = `${name} would be there at ${at(help.start, zone)}`;
  switch (help.kind) {
    case 'skill': {
      const who = (help.skills ?? []).map((skill) => HOLDERS[skill as Skill]).join(' and ');
      return `Any technician ${who}${until} (from the place of ${name}: ${at(help.start, zone)})`;
    }
    case 'part':
      return `More on a van: ${(help.parts ?? []).map(partWords).join(', ')} (${there})`;
    case 'overtime':
      return `Overtime for ${name}, ${minutesInWords(help.overtimeMinutes ?? 0)} in all: there at ${at(help.start, zone)}`;
    case 'declined':
      return `${name}, who gave it back, takes it after all: there at ${at(help.start, zone)}`;
  }
}

const dollars = (money: number): string => `$${Math.round(money).toLocaleString('en-US')}`;
/** The planner counts in seconds. */
const at = (seconds: number, zone: string): string => wallClock(seconds * 1000, zone);
