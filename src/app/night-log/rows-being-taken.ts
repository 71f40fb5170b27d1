import { effect, inject, Injectable, signal, untracked } from '@angular/core';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Drafts } from '../core/drafts';
import { ProblemError } from '../core/problem-error';

const KEPT_AS = 'night-log:taken';

/** A row that was put aside and is being taken as a call; the call's id is known beforehand. */
export interface RowBeingTaken {
  readonly rowId: string;
  readonly callId: string;
  readonly line: number;
}

/**
 * Remembers which rows are being taken as calls, over a change of screen and a reload, and offers
 * to settle the row once its call is on the board.
 */
@Injectable({ providedIn: 'root' })
export class RowsBeingTaken {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly drafts = inject(Drafts);
  private readonly announce = inject(Announce);

  private readonly rows = signal<readonly RowBeingTaken[]>(
    this.drafts.load(KEPT_AS, areRows) ?? [],
  );
  private readonly offered = new Set<string>();

  readonly all = this.rows.asReadonly();

  constructor() {
    effect(() => {
      const calls = this.board.calls();
      for (const row of this.rows()) {
        const call = calls.get(row.callId);
        if (!call || this.offered.has(row.callId)) continue;
        this.offered.add(row.callId);
        untracked(() =>
          this.announce.notice(
            `Call ${call.number} is taken from line ${row.line} of a night log.`,
            { label: 'Settle the line', run: () => void this.settle(row, call.number) },
          ),
        );
      }
    });
  }

  add(row: RowBeingTaken): void {
    this.keep([...this.rows().filter(({ rowId }) => rowId !== row.rowId), row]);
  }

  forget(rowId: string): void {
    if (this.rows().some((row) => row.rowId === rowId)) {
      this.keep(this.rows().filter((row) => row.rowId !== rowId));
    }
  }

  private async settle(row: RowBeingTaken, number: number): Promise<void> {
    try {
      await this.api.call('settleNightLogRow', {
        params: { rowId: row.rowId },
        body: { commandId: newId(), callId: row.callId, note: `Taken as call ${number}` },
      });
      this.forget(row.rowId);
      this.announce.notice(`Line ${row.line} is settled.`);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (error.code === 'already-used') this.forget(row.rowId);
      this.announce.notice(error.message);
    }
  }

  private keep(rows: readonly RowBeingTaken[]): void {
    this.rows.set(rows);
    if (rows.length > 0) this.drafts.save(KEPT_AS, rows);
    else this.drafts.clear(KEPT_AS);
  }
}

const areRows = (value: unknown): value is readonly RowBeingTaken[] =>
  Array.isArray(value) &&
  value.every(
    (row: Partial<Record<keyof RowBeingTaken, unknown>> | null) =>
      typeof row?.rowId === 'string' &&
      typeof row.callId === 'string' &&
      typeof row.line === 'number',
  );
