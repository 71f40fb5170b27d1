import { randomInt } from 'node:crypto';
import { hash, verify } from '@node-rs/argon2';
import { Refusal } from '@shared/domain/errors';

/**
 * argon2id with 19 MiB, two passes and one lane: the least that the OWASP Password Storage Cheat
 * Sheet advises (from memory); about 40 ms of one core here. `algorithm: 2` is argon2id.
 */
const COST = { algorithm: 2, memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const;

export const hashPassword = (password: string): Promise<string> =>
  hash(password.normalize('NFKC'), COST);

export const isPassword = (stored: string, password: string): Promise<boolean> =>
  verify(stored, password.normalize('NFKC'));

/** Whether a hash was made with less than today's cost, and should be made again at sign-in. */
export const isOutdated = (stored: string): boolean =>
  !stored.startsWith(`$argon2id$v=19$m=${COST.memoryCost},t=${COST.timeCost},p=`);

let decoy: Promise<string> | undefined;
/** Costs an unknown name the same time as a wrong password. */
export async function pretendToCheck(password: string): Promise<void> {
  decoy ??= hashPassword('nobody has this password');
  await isPassword(await decoy, password);
}

const CONTEXT_WORDS = [
  'thawline',
  'dispatcher',
  'technician',
  'manager',
  'freezer',
  'refrigerator',
];
const COMMON = [
  'password',
  'passw0rd',
  'letmein',
  'welcome',
  'qwerty',
  'iloveyou',
  'administrator',
  'abc123',
  '1q2w3e4r',
];

/**
 * Refuses what is guessed first. NIST SP 800-63B-4 (2025) asks for a blocklist and against rules
 * of composition; the length is in the contract.
 *
 * @throws Refusal `password-refused`
 */
export function refuseGuessable(password: string, about: readonly string[]): void {
  const plain = password.toLowerCase();
  const left = [...COMMON, ...CONTEXT_WORDS, ...about.map((word) => word.toLowerCase())]
    .filter((word) => word.length >= 4)
    .reduce((rest, word) => rest.split(word).join(''), plain)
    .replace(/[^\p{L}\p{N}]|\d/gu, '');
  if (new Set(plain).size < 6)
    throw new Refusal('password-refused', 'It repeats too few characters. Try several words.');
  if (left.length < 5)
    throw new Refusal(
      'password-refused',
      'It is made of words that are guessed first, such as the product, a role or your own name.',
    );
}

const WORDS =
  'amber anchor basin beacon birch bramble breeze brick bridge bucket cabin candle canvas cedar channel clover cobalt comet copper coral cotton cradle cricket dapple dory drift ember fathom fern ferry flint gable garnet ginger glacier granite harbor hazel heron hollow iris island ivory jasper juniper kelp kettle lagoon lantern larch ledge lichen linen lobster maple marble meadow mistral moss nettle nimbus oar oatmeal ochre orchard otter paddle pebble pepper pine plover prairie quarry quartz raven reef river rowan saddle saffron sandbar sextant shingle silver slate sparrow spruce starling stone sumac tansy tartan teal thistle timber topaz tundra umber valley velvet walnut willow winter wren yarrow'.split(
    ' ',
  );

/**
 * A password of five words and a number, to be given once and replaced: about 40 bits, behind a
 * limit on attempts.
 */
export function makePassword(): string {
  const words = Array.from({ length: 5 }, () => WORDS[randomInt(WORDS.length)]);
  return `${words.join('-')}-${String(randomInt(10, 100))}`;
}
