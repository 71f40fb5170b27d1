import type { StormRoadDto } from '@shared/contract/storm-roads';
import type { Instant } from '@shared/domain/instant';
import type { StormRoadKind } from '@shared/domain/roads/conditions';
import { isDuring } from '@shared/domain/storm-roads';
import { whenWords } from '../board/time-words';

export const KIND_WORDS: Readonly<Record<StormRoadKind, string>> = {
  closed: 'Closed',
  flooded: 'Flooded',
  slow: 'Slow',
};

/** Whether drivers meet it now, later, or no more. */
export type StormRoadTense = 'reported' | 'now' | 'later' | 'over';

export function tenseOf(road: StormRoadDto, now: Instant): StormRoadTense {
  if (road.state === 'reported') return 'reported';
  if (road.state === 'lifted') return 'over';
  // A screen's clock ticks: what begins with its making has begun.
  const at = Math.max(now, road.at);
  if (isDuring(road, at)) return 'now';
  return road.startsAt > at ? 'later' : 'over';
}

/** "Closed", "Slow, 40 % of the usual speed". */
export const kindWords = ({
  kind,
  speedShare,
}: Pick<StormRoadDto, 'kind' | 'speedShare'>): string =>
  speedShare === null
    ? KIND_WORDS[kind]
    : `${KIND_WORDS[kind]}, ${Math.round(speedShare * 100)} % of the usual speed`;

/** "until further notice", "until 18:00", "from 22:00 until Fri 06:00", "over since 10:00". */
export function spanWords(road: StormRoadDto, now: Instant, zone: string): string {
  const { startsAt, endsAt, liftedAt } = road;
  const when = (at: Instant): string => whenWords(at, now, zone);
  if (road.state === 'lifted' && liftedAt !== null) return `lifted ${when(liftedAt)}`;
  const until = endsAt === null ? 'until further notice' : `until ${when(endsAt)}`;
  switch (tenseOf(road, now)) {
    case 'later':
      return `from ${when(startsAt)} ${until}`;
    case 'over':
      return endsAt === null ? '' : `over since ${when(endsAt)}`;
    case 'reported':
      return `reported ${when(road.at)} by ${road.by}, not confirmed`;
    case 'now':
      return until;
  }
}

/** What is different in a storm road since its reader saw it, in words. */
export function stormRoadChanges(
  before: StormRoadDto,
  after: StormRoadDto,
  words: (at: Instant) => string,
): string[] {
  const changes: string[] = [];
  const tell = (what: string, was: string, is: string): void => {
    if (was !== is) changes.push(`${what}: ${was || 'nothing'}, now ${is || 'nothing'}`);
  };
  const end = ({ endsAt }: StormRoadDto): string =>
    endsAt === null ? 'until further notice' : words(endsAt);
  tell('Name', before.name, after.name);
  tell('What it is', kindWords(before), kindWords(after));
  tell('State', before.state, after.state);
  tell('Notes', before.notes, after.notes);
  tell('Begins', words(before.startsAt), words(after.startsAt));
  tell('Ends', end(before), end(after));
  if (JSON.stringify(before.shape) !== JSON.stringify(after.shape))
    changes.push('The stretch or outline was changed');
  return changes;
}
