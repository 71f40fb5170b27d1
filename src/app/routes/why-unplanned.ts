import type { CallRow } from '@shared/contract/calls';
import type { PlanDto, TechnicianDto } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import { PART_WORDS, type Part, type Skill } from '@shared/domain/skills';
import { SKILL_WORDS } from '../board/queue-words';

type Unplanned = PlanDto['unplanned'][number];

/** In order of how soon somebody can do something about it. */
export type UnplannedReason = Unplanned['reason'] | 'not-proposed';

export interface WhyUnplanned {
  readonly reason: UnplannedReason;
  readonly words: string;
  /** What would bring it on a route, as the newest proposal tried. */
  readonly help?: readonly string[] | undefined;
}

/**
 * Why a waiting call is on no route. What a proposal found out counts while it is the newest one;
 * otherwise what can be told from the call and the technicians.
 *
 * @param found the call's line in the newest proposal
 */
export function whyUnplanned(
  call: Pick<CallRow, 'address' | 'cutOff' | 'skills' | 'parts'>,
  technicians: Iterable<TechnicianDto>,
  now: Instant,
  found: Unplanned | undefined,
): WhyUnplanned {
  if (call.address.lonLat === null) {
    return { reason: 'unlocated', words: 'Nobody knows where it is: set a point on the map.' };
  }
  if (call.cutOff) {
    return {
      reason: 'cut-off',
      words: 'Cut off: every road there is closed or flooded. Settle it by phone, or wait.',
    };
  }
  const working = [...technicians].filter((technician) => technician.active);
  const skilled = working.filter(({ skills }) => call.skills.every((s) => skills.includes(s)));
  if (working.length > 0 && skilled.length === 0) {
    const words = `No technician has the skill: ${skillWords(call.skills)}.`;
    return { reason: 'skill', words, ...(found?.help ? { help: found.help } : {}) };
  }
  if (working.length > 0 && !skilled.some((one) => one.shifts.some((s) => s.endsAt > now))) {
    return { reason: 'no-shift', words: 'Nobody who may do it has a shift now or later.' };
  }
  if (found) {
    const { reason, words, help } = found;
    return { reason, words, ...(help ? { help } : {}) };
  }
  return { reason: 'not-proposed', words: 'Not yet planned: propose routes, or add it by hand.' };
}

export const skillWords = (skills: readonly Skill[]): string =>
  skills.map((skill) => SKILL_WORDS[skill].toLowerCase()).join(', ');

export const partWords = (parts: readonly Part[]): string =>
  parts.map((part) => PART_WORDS[part]).join(', ');
