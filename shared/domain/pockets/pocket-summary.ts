import type { Instant } from '../instant';
import type { LonLat } from '../travel/great-circle';
import { DEFAULT_POCKETS, pockets, type PocketSettings } from './pockets';

/** An open call as the map sees it. */
export interface PocketCall {
  readonly id: string;
  readonly at: LonLat;
  /** What can still be lost here. */
  readonly valueAtRiskCents: number;
  /** The next moment at which something is lost; null when nothing is left to save. */
  readonly nextSaveByAt: Instant | null;
}

export interface PocketSummary {
  /** Name of the pocket for as long as it lives. */
  readonly key: string;
  /** Ids of its calls, sorted. */
  readonly members: readonly string[];
  readonly count: number;
  readonly centroid: LonLat;
  readonly valueAtRiskCents: number;
  readonly nextSaveByAt: Instant | null;
}

export interface PocketOptions extends PocketSettings {
  /** The pockets of the picture before, whose keys live on. */
  readonly previous?: readonly Pick<PocketSummary, 'key' | 'members'>[];
}

/**
 * The pockets of the open calls, the one with most at risk first.
 *
 * A pocket keeps the key of the earlier pocket with which it shares most calls, as long as that is
 * at least half of the smaller of the two; each key goes to one pocket only. A new pocket takes its
 * key from one of its members, chosen by a hash of the ids (min-hash): of n calls each is as likely
 * to be the one, so that even without an earlier picture a call that comes or goes changes the key
 * only once in about n times. The order of the calls changes nothing.
 */
export function summarisePockets(
  calls: readonly PocketCall[],
  options: PocketOptions = DEFAULT_POCKETS,
): readonly PocketSummary[] {
  const sorted = [...calls].sort((a, b) => compare(a.id, b.id));
  const { clusterOf, clusterCount } = pockets(
    sorted.map((call) => call.at),
    options,
  );
  const groups: PocketCall[][] = Array.from({ length: clusterCount }, () => []);
  sorted.forEach((call, index) => groups[clusterOf[index]!]?.push(call));
  const keys = keysFor(groups, options.previous ?? []);
  return groups
    .map((group, index) => summarise(keys[index]!, group))
    .sort((a, b) => b.valueAtRiskCents - a.valueAtRiskCents || compare(a.key, b.key));
}

function summarise(key: string, group: readonly PocketCall[]): PocketSummary {
  const saveBys = group.flatMap((call) => call.nextSaveByAt ?? []);
  return {
    key,
    members: group.map((call) => call.id),
    count: group.length,
    centroid: centroidOf(group),
    valueAtRiskCents: group.reduce((sum, call) => sum + call.valueAtRiskCents, 0),
    nextSaveByAt: saveBys.length > 0 ? saveBys.reduce((a, b) => Math.min(a, b)) : null,
  };
}

function centroidOf(group: readonly PocketCall[]): LonLat {
  const lon0 = group[0]!.at[0];
  let east = 0;
  let north = 0;
  for (const { at } of group) {
    const step = at[0] - lon0;
    east += step - 360 * Math.round(step / 360);
    north += at[1];
  }
  const lon = lon0 + east / group.length;
  return [lon - 360 * Math.round(lon / 360), north / group.length];
}

function keysFor(
  groups: readonly (readonly PocketCall[])[],
  previous: readonly Pick<PocketSummary, 'key' | 'members'>[],
): readonly string[] {
  const earlierOf = new Map<string, number>();
  previous.forEach(({ members }, index) => members.forEach((id) => earlierOf.set(id, index)));
  const overlaps = groups.flatMap((group, now) => {
    const counts = new Map<number, number>();
    for (const { id } of group) {
      const before = earlierOf.get(id);
      if (before !== undefined) counts.set(before, (counts.get(before) ?? 0) + 1);
    }
    return [...counts].map(([before, shared]) => ({ now, before, shared }));
  });
  overlaps.sort(
    (a, b) => b.shared - a.shared || compare(previous[a.before]!.key, previous[b.before]!.key),
  );
  const keys: (string | undefined)[] = groups.map(() => undefined);
  const taken = new Set<string>();
  for (const { now, before, shared } of overlaps) {
    const { key, members } = previous[before]!;
    const smaller = Math.min(groups[now]!.length, members.length);
    if (keys[now] !== undefined || taken.has(key) || shared * 2 < smaller) continue;
    keys[now] = key;
    taken.add(key);
  }
  return groups.map((group, index) => {
    const kept = keys[index];
    if (kept !== undefined) return kept;
    const fresh = freshKey(group, taken);
    taken.add(fresh);
    return fresh;
  });
}

/** The id with the smallest hash whose key is free. */
function freshKey(group: readonly PocketCall[], taken: ReadonlySet<string>): string {
  const ids = group.map((call) => call.id).sort((a, b) => hash(a) - hash(b) || compare(a, b));
  const free = ids.find((id) => !taken.has(`pocket-${id}`));
  // All taken only if every member once named a pocket that now lives elsewhere.
  return free !== undefined ? `pocket-${free}` : `pocket-${ids.join('+')}`;
}

/** FNV-1a with a final mix, 32 bits. */
function hash(text: string): number {
  let h = 0x811c9dc5;
  for (let i = 0; i < text.length; i++) h = Math.imul(h ^ text.charCodeAt(i), 0x01000193);
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  return (h ^ (h >>> 13)) >>> 0;
}

/** By code unit: the same on every machine, whatever its language. */
function compare(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
