import type { AreaDto } from '@shared/contract/areas';
import type { Instant } from '@shared/domain/instant';
import { readTimeEntry } from '../intake/time-entry';

/** The name and the times of an outage area as somebody types them. */
export interface AreaTimes {
  readonly name: string;
  readonly outText: string;
  readonly outAt: Instant | null;
  readonly backText: string;
  readonly backAt: Instant | null;
  readonly isStillOut: boolean;
  /** Why what was typed last cannot be read; empty when it can. */
  readonly outTrouble: string;
  readonly backTrouble: string;
}

export const BLANK_TIMES: AreaTimes = {
  name: '',
  outText: '',
  outAt: null,
  backText: '',
  backAt: null,
  isStillOut: true,
  outTrouble: '',
  backTrouble: '',
};

/** @param words tells a moment as the field shows it, such as "Thu 19:20" */
export const timesOf = (area: AreaDto, words: (at: Instant) => string): AreaTimes => ({
  ...BLANK_TIMES,
  name: area.name,
  outAt: area.outAt,
  outText: words(area.outAt),
  backAt: area.backAt,
  backText: area.backAt === null ? '' : words(area.backAt),
  isStillOut: area.backAt === null,
});

export function typeOut(times: AreaTimes, text: string, now: Instant, zone: string): AreaTimes {
  const { at, trouble } = read(text, now, zone);
  return { ...times, outText: text, outAt: at, outTrouble: trouble };
}

/** A time at which power came back takes the tick from "still out". */
export function typeBack(times: AreaTimes, text: string, now: Instant, zone: string): AreaTimes {
  const { at, trouble } = read(text, now, zone);
  const isStillOut = text.trim() === '' && times.isStillOut;
  return { ...times, backText: text, backAt: at, backTrouble: trouble, isStillOut };
}

export const setStillOut = (times: AreaTimes, isStillOut: boolean): AreaTimes =>
  isStillOut
    ? { ...times, isStillOut, backText: '', backAt: null, backTrouble: '' }
    : { ...times, isStillOut };

/** What keeps these times from being saved, as a sentence; empty when nothing does. */
export function problemIn(times: AreaTimes): string {
  const { name, outAt, outTrouble, backAt, backTrouble, isStillOut } = times;
  if (name.trim() === '') return 'The area needs a name.';
  if (outTrouble !== '') return `Power went: ${outTrouble}`;
  if (outAt === null) return 'When did the power go?';
  if (isStillOut) return '';
  if (backTrouble !== '') return `Came back: ${backTrouble}`;
  if (backAt === null) return 'When did it come back? Or tick "still out".';
  return backAt <= outAt ? 'It came back before it went.' : '';
}

function read(
  text: string,
  now: Instant,
  zone: string,
): { readonly at: Instant | null; readonly trouble: string } {
  const entry = readTimeEntry(text, now, zone);
  if (entry.kind === 'moment') return { at: entry.at, trouble: '' };
  return { at: null, trouble: entry.kind === 'blank' ? '' : entry.why };
}

/** What is different in an area since its reader saw it, in words. */
export function areaChanges(
  before: AreaDto,
  after: AreaDto,
  words: (at: Instant) => string,
): string[] {
  const changes: string[] = [];
  const back = (area: AreaDto): string => (area.backAt === null ? 'still out' : words(area.backAt));
  if (before.name !== after.name) changes.push(`Name: ${before.name}, now ${after.name}`);
  if (before.outAt !== after.outAt) {
    changes.push(`Power went: ${words(before.outAt)}, now ${words(after.outAt)}`);
  }
  if (before.backAt !== after.backAt)
    changes.push(`Came back: ${back(before)}, now ${back(after)}`);
  if (JSON.stringify(before.shape) !== JSON.stringify(after.shape)) {
    changes.push('The outline was changed');
  }
  return changes;
}
