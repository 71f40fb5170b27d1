import { UnreadableRegion } from './unreadable-region';

/** What the system's refusals to write mean for the person who waits, and what helps. */
const WORDS: Readonly<Record<string, string>> = {
  ENOSPC: 'The disk is full. Make room, or remove a region that is no longer used; then try again.',
  EDQUOT: 'The disk quota is used up. Make room, or have it raised; then try again.',
  EROFS: 'The disk can only be read. Have it made writable, then try again.',
  EACCES: 'The server may not write into its folder. Give its user the right to, then try again.',
  EPERM: 'The server may not write into its folder. Give its user the right to, then try again.',
  EMFILE: 'The server has too many files open. Try again in a moment.',
};

/** The same error, or what it means in words where the disk said no. */
export function inWords(error: unknown): unknown {
  const code = (error as NodeJS.ErrnoException | null)?.code;
  const words = code === undefined ? undefined : WORDS[code];
  return words === undefined ? error : new UnreadableRegion(words);
}

export const isDiskFull = (error: unknown): boolean => {
  const code = (error as NodeJS.ErrnoException | null)?.code;
  return code === 'ENOSPC' || code === 'EDQUOT';
};
