import { Injectable } from '@angular/core';

const PREFIX = 'thawline:draft:';
/** Nobody finishes a call a week later, and what a caller said should not lie about. */
const KEPT_MS = 7 * 24 * 60 * 60_000;

interface Kept {
  readonly savedAt: number;
  readonly value: unknown;
}

/**
 * Unfinished work that survives a reload or a crash, kept in this browser per user. It outlives a
 * lost session; signing out clears it.
 */
@Injectable({ providedIn: 'root' })
export class Drafts {
  private userId: string | null = null;

  /** Says whose drafts these are; the session does this. */
  of(userId: string): void {
    this.userId = userId;
    for (const name of this.names()) {
      const kept = read(name);
      if (!kept || Date.now() - kept.savedAt > KEPT_MS) localStorage.removeItem(name);
    }
  }

  /** Keeps `value`, which must survive JSON. Silently does nothing when storage is full or refused. */
  save(key: string, value: unknown): void {
    if (this.userId === null) return;
    try {
      const kept: Kept = { savedAt: Date.now(), value };
      localStorage.setItem(this.nameOf(key), JSON.stringify(kept));
    } catch {
      // QuotaExceededError or a private window: work goes on, only the draft is not kept.
    }
  }

  /** The draft, if there is one of the expected shape. An older program may have written it. */
  load<T>(key: string, isValid: (value: unknown) => value is T): T | null {
    if (this.userId === null) return null;
    const value = read(this.nameOf(key))?.value;
    return isValid(value) ? value : null;
  }

  clear(key: string): void {
    if (this.userId !== null) localStorage.removeItem(this.nameOf(key));
  }

  /** Whether there is anything that signing out would throw away. */
  hasAny(): boolean {
    return this.names().length > 0;
  }

  clearAll(): void {
    for (const name of this.names()) localStorage.removeItem(name);
  }

  private nameOf(key: string): string {
    return `${PREFIX}${this.userId}:${key}`;
  }

  private names(): string[] {
    if (this.userId === null) return [];
    return Object.keys(localStorage).filter((name) => name.startsWith(this.nameOf('')));
  }
}

function read(name: string): Kept | null {
  try {
    const kept: unknown = JSON.parse(localStorage.getItem(name) ?? 'null');
    return typeof kept === 'object' && kept !== null && 'savedAt' in kept && 'value' in kept
      ? (kept as Kept)
      : null;
  } catch {
    return null; // Not JSON: written by something else.
  }
}
