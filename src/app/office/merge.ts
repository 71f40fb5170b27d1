/** A field that somebody else changed while this person was editing. */
export interface Overtaken<K> {
  readonly key: K;
  readonly was: string;
  readonly now: string;
  /** What this person has typed; `null` when they had not touched it. */
  readonly mine: string | null;
}

/**
 * What is different since a form was filled in, for whoever was refused because they saw an older
 * version.
 */
export function overtaken<K>(
  keys: readonly K[],
  { base, theirs, mine }: Readonly<Record<'base' | 'theirs' | 'mine', (key: K) => string>>,
): Overtaken<K>[] {
  return keys
    .filter((key) => base(key) !== theirs(key))
    .map((key) => ({
      key,
      was: base(key),
      now: theirs(key),
      mine: mine(key) === base(key) ? null : mine(key),
    }));
}
