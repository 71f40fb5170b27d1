import type { CompartmentKind, UnitKind } from '../cold-unit';
import type { Instant } from '../instant';
import type { PhoneNumber } from '../phone-number';
import type { AddressSaid } from './address-text';
import type { Danger } from './danger-words';
import type { MedicineSaid } from './medicine-words';

/** One cold unit of a household, as a night log names it. */
export interface NightUnit {
  readonly kind: UnitKind;
  readonly compartments: readonly CompartmentKind[];
  /** The words that named it. */
  readonly said: string;
  /** The kind was not said in so many words; the cautious one was taken. */
  readonly assumed: boolean;
}

/** What an answering service wrote down of one call. */
export interface NightCall {
  readonly name: string | null;
  readonly business: string | null;
  readonly phone: PhoneNumber | null;
  readonly otherPhones: readonly PhoneNumber[];
  readonly address: AddressSaid | null;
  readonly receivedAt: Instant;
  readonly receivedAtIs: 'read' | 'estimated';
  readonly units: readonly NightUnit[];
  readonly medicine: MedicineSaid;
  /** Named in the row and not denied: to be asked about before anything else. */
  readonly dangers: readonly Danger[];
  /** 'en', 'es', another language in plain words, or null when nothing is said of it. */
  readonly language: string | null;
  readonly contents: string;
  readonly remarks: string;
  readonly powerOutAt: Instant | null;
  readonly powerBackAt: Instant | null;
  readonly powerStillOut: boolean;
  /** The row says that a unit runs (again), so the call may be settled. */
  readonly saysRunning: boolean;
  /** What was assumed or could not be read, in words, for the person who takes over the call. */
  readonly doubts: readonly string[];
}

export type RowResult =
  | { readonly kind: 'understood'; readonly call: NightCall }
  /** A person has to look. `call` holds what could be read, so that only the rest is typed. */
  | { readonly kind: 'aside'; readonly reason: string; readonly call: NightCall }
  | { readonly kind: 'empty'; readonly reason: string }
  /** The rest of the message of the row on the line `of`. */
  | { readonly kind: 'continued'; readonly of: number };

/** A row of the log with what became of it. The cells are those of the file, untouched. */
export interface RowReading {
  readonly line: number;
  readonly cells: readonly string[];
  /** The same for the same row, whenever it is imported. */
  readonly key: string;
  readonly result: RowResult;
}
