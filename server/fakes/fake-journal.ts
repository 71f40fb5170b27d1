import { appendFileSync, existsSync, mkdirSync, readFileSync } from 'node:fs';
import path from 'node:path';

import type { SendFault } from './fake-faults';

/** Everything that the fake did, one JSON line each. What is written is never changed. */
export type JournalFact =
  | {
      readonly kind: 'accepted';
      readonly sid: string;
      readonly to: string;
      readonly from: string;
      readonly body: string;
      readonly statusCallback: string | null;
      /** The sender's own id, as the callback address carries it. */
      readonly outbox: string | null;
    }
  | {
      readonly kind: 'refused';
      readonly httpStatus: number;
      readonly code: number;
      readonly to: string;
      readonly outbox: string | null;
    }
  | {
      readonly kind: 'fault';
      readonly fault: SendFault;
      readonly to: string;
      readonly outbox: string | null;
    }
  | { readonly kind: 'status'; readonly sid: string; readonly status: string }
  | {
      readonly kind: 'inbound';
      readonly sid: string;
      readonly from: string;
      readonly to: string;
      readonly body: string;
    }
  | {
      readonly kind: 'webhook';
      readonly sid: string;
      readonly url: string;
      /** The status word that was reported; null for an inbound text. */
      readonly reported: string | null;
      /** What the product answered; null when nobody did. */
      readonly httpStatus: number | null;
    };

export type JournalEntry = JournalFact & {
  /** From 1, without gaps. */
  readonly n: number;
  /** Milliseconds since 1970. */
  readonly at: number;
};

export interface Journal {
  entries(): readonly JournalEntry[];
  append(fact: JournalFact): JournalEntry;
}

/** Opens the journal, or goes on with the one that is there. Each entry is on disk when `append` returns. */
export function openJournal(file: string): Journal {
  mkdirSync(path.dirname(file), { recursive: true });
  const entries = existsSync(file) ? readJournal(file) : [];
  return {
    entries: () => entries,
    append: (fact) => {
      const entry: JournalEntry = { n: entries.length + 1, at: Date.now(), ...fact };
      appendFileSync(file, `${JSON.stringify(entry)}\n`);
      entries.push(entry);
      return entry;
    },
  };
}

/** Reads a journal; a last line that a killed process left half-written is closed and not counted. */
function readJournal(file: string): JournalEntry[] {
  const text = readFileSync(file, 'utf8');
  if (text !== '' && !text.endsWith('\n')) appendFileSync(file, '\n');
  return text
    .split('\n')
    .map(parseLine)
    .filter((entry): entry is JournalEntry => entry !== null);
}

function parseLine(line: string): JournalEntry | null {
  try {
    // Written by `append` above, so its shape is known once it parses.
    return JSON.parse(line) as JournalEntry;
  } catch {
    // SyntaxError: the empty line at the end, or a torn one.
    return null;
  }
}
