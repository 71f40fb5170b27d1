import type { StormRoadDto, StormRoadShape } from '@shared/contract/storm-roads';
import type { Instant } from '@shared/domain/instant';
import type { StormRoadKind } from '@shared/domain/roads/conditions';
import { blocksRoad, stormRoadFault } from '@shared/domain/storm-roads';
import { readTimeAhead, readTimeAround } from './time-ahead';

/** A moment as it is typed, and what it means. */
export interface TypedTime {
  readonly text: string;
  readonly at: Instant | null;
  /** Why the text cannot be read; empty when it can. */
  readonly trouble: string;
}

/** What somebody says of a storm road, but for where it is. */
export interface StormRoadDraft {
  readonly kind: StormRoadKind;
  readonly name: string;
  /** Taken from the road until somebody types one. */
  readonly isNameTyped: boolean;
  readonly notes: string;
  readonly start: TypedTime;
  readonly end: TypedTime;
  readonly isUntilNotice: boolean;
  /** Percent of the usual speed, as typed. */
  readonly speedText: string;
}

const NO_TIME: TypedTime = { text: '', at: null, trouble: '' };

export const newDraft = (now: Instant): StormRoadDraft => ({
  kind: 'closed',
  name: '',
  isNameTyped: false,
  notes: '',
  start: { text: 'now', at: now, trouble: '' },
  end: NO_TIME,
  isUntilNotice: true,
  speedText: '50',
});

/** @param words tells a moment as the field shows it, such as "Thu 19:20" */
export const draftOf = (road: StormRoadDto, words: (at: Instant) => string): StormRoadDraft => ({
  kind: road.kind,
  name: road.name,
  isNameTyped: true,
  notes: road.notes,
  start: { text: words(road.startsAt), at: road.startsAt, trouble: '' },
  end: road.endsAt === null ? NO_TIME : { text: words(road.endsAt), at: road.endsAt, trouble: '' },
  isUntilNotice: road.endsAt === null,
  speedText: String(Math.round((road.speedShare ?? 0.5) * 100)),
});

export const typeStart = (
  draft: StormRoadDraft,
  text: string,
  now: Instant,
  zone: string,
): StormRoadDraft => ({ ...draft, start: typed(text, readTimeAround(text, now, zone)) });

/** A time at which it ends takes the tick from "until further notice". */
export const typeEnd = (
  draft: StormRoadDraft,
  text: string,
  now: Instant,
  zone: string,
): StormRoadDraft => ({
  ...draft,
  end: typed(text, readTimeAhead(text, now, zone)),
  isUntilNotice: text.trim() === '' && draft.isUntilNotice,
});

export const setUntilNotice = (draft: StormRoadDraft, isUntilNotice: boolean): StormRoadDraft => ({
  ...draft,
  isUntilNotice,
  ...(isUntilNotice ? { end: NO_TIME } : {}),
});

function typed(text: string, entry: ReturnType<typeof readTimeAhead>): TypedTime {
  if (entry.kind === 'moment') return { text, at: entry.at, trouble: '' };
  return { text, at: null, trouble: entry.kind === 'blank' ? '' : entry.why };
}

export type StormRoadContent = Pick<
  StormRoadDto,
  'kind' | 'name' | 'notes' | 'shape' | 'startsAt' | 'endsAt' | 'speedShare'
>;

/** What is to be saved, or what keeps it from being saved, as a sentence. */
export function contentOf(
  draft: StormRoadDraft,
  shape: StormRoadShape | null,
): { readonly content: StormRoadContent } | { readonly problem: string } {
  const { kind, name, notes, start, end, isUntilNotice } = draft;
  if (!shape) return { problem: 'Pick the road first, or draw the area.' };
  if (name.trim() === '') return { problem: 'It needs a name.' };
  if (start.trouble !== '') return { problem: `Begins: ${start.trouble}` };
  if (start.at === null) return { problem: 'When does it begin?' };
  if (!isUntilNotice && end.trouble !== '') return { problem: `Ends: ${end.trouble}` };
  if (!isUntilNotice && end.at === null)
    return { problem: 'When does it end? Or tick "until further notice".' };
  const speedShare = blocksRoad(kind) ? null : shareOf(draft.speedText);
  if (!blocksRoad(kind) && speedShare === null)
    return { problem: 'How slow is it? A whole number of percent is needed.' };
  const content: StormRoadContent = {
    kind,
    name: name.trim(),
    notes: notes.trim(),
    shape,
    startsAt: start.at,
    endsAt: isUntilNotice ? null : end.at,
    speedShare,
  };
  const fault = stormRoadFault(content);
  return fault === null ? { content } : { problem: fault };
}

function shareOf(text: string): number | null {
  const percent = Number(text.trim().replace('%', ''));
  return text.trim() === '' || !Number.isInteger(percent) ? null : percent / 100;
}

/** Only what differs from what its writer saw, so that nothing else is written over. */
export function changedContent(
  base: StormRoadDto,
  content: StormRoadContent,
): Partial<StormRoadContent> {
  const keys = Object.keys(content) as (keyof StormRoadContent)[];
  return Object.fromEntries(
    keys
      .filter((key) => JSON.stringify(base[key]) !== JSON.stringify(content[key]))
      .map((key) => [key, content[key]]),
  );
}
