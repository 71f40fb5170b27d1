import type { AreaDto, PocketDto } from '@shared/contract/areas';
import type { Instant } from '@shared/domain/instant';
import { whenWords } from '../board/time-words';
import { money } from '../core/zone';

/** "out 22:10, back 02:40"; "out since Thu 22:10". */
export function areaTimesWords(
  { outAt, backAt }: Pick<AreaDto, 'outAt' | 'backAt'>,
  now: Instant,
  zone: string,
): string {
  const out = whenWords(outAt, now, zone);
  return backAt === null
    ? `still out, since ${out}`
    : `out ${out}, back ${whenWords(backAt, now, zone)}`;
}

/** "14 calls · $3,240 · by 02:40": how many, what can still be saved, when the next is lost. */
export function pocketWords(
  { callIds, valueAtRiskCents, nextSaveByAt }: PocketDto,
  now: Instant,
  zone: string,
): string {
  const parts = [`${callIds.length} calls`, money(valueAtRiskCents)];
  if (nextSaveByAt !== null) parts.push(`by ${whenWords(nextSaveByAt, now, zone)}`);
  return parts.join(' · ');
}

/** What saving an area did, to its calls as well. */
export function savedWords(area: AreaDto, inside: number): string {
  const calls = inside === 1 ? '1 open call lies' : `${inside} open calls lie`;
  if (inside === 0) return `${area.name} is saved. No open call lies inside.`;
  const follow =
    inside === 1
      ? 'unless it has times of its own, it follows it now'
      : 'those without times of their own follow it now';
  return `${area.name} is saved. ${calls} inside; ${follow}.`;
}
