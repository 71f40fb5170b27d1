import { computed, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { CallRow } from '@shared/contract/calls';
import type { NightLogDto, NightLogRowView } from '@shared/contract/night-logs';
import { isOpen } from '@shared/domain/call-state';
import { formatPhone } from '@shared/domain/phone-number';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import type { Setback } from './night-log-model';
import { RowsBeingTaken } from './rows-being-taken';

/** Rows that were put aside, and what a person does with them. */
@Injectable()
export class AsidesModel {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly session = inject(Session);
  private readonly taking = inject(RowsBeingTaken);

  private readonly known = signal<readonly NightLogRowView[] | null>(null);
  private readonly stopped = signal<Setback | null>(null);
  private readonly pending = signal(0);
  private fetches = 0;

  /** In the order of their lines; `null` until the first answer. */
  readonly rows = this.known.asReadonly();
  readonly setback = this.stopped.asReadonly();
  readonly isBusy = computed(() => this.pending() > 0);

  private readonly openByPhone = computed(() => {
    const calls = [...this.board.calls().values()].filter((call) => isOpen(call.state));
    return new Map(calls.flatMap((call) => (call.phone ? [[formatPhone(call.phone), call]] : [])));
  });
  private readonly byNumber = computed(
    () => new Map([...this.board.calls().values()].map((call) => [call.number, call])),
  );

  constructor() {
    effect(() => {
      this.session.storm();
      untracked(() => void this.fetch());
    });
  }

  async fetch(): Promise<void> {
    const stormId = this.session.storm()?.id;
    if (!stormId) {
      this.known.set(null);
      return;
    }
    const fetch = ++this.fetches;
    await this.attempt(async () => {
      const { rows } = await this.api.call('listAsides', { params: { stormId } });
      if (fetch === this.fetches) this.known.set(rows);
    });
  }

  /** The call that was taken from a row, once it is on the board. */
  takenCall(rowId: string): CallRow | null {
    const taken = this.taking.all().find((row) => row.rowId === rowId);
    return this.board.calls().get(taken?.callId ?? '') ?? null;
  }

  /** The open call of the row's phone: perhaps the row belongs to it. */
  callOfPhone(row: NightLogRowView): CallRow | null {
    return row.phone === '' ? null : (this.openByPhone().get(row.phone) ?? null);
  }

  callOfNumber(number: number): CallRow | null {
    return this.byNumber().get(number) ?? null;
  }

  /**
   * Settles a row: with a call that it belongs to, or with nothing to do.
   *
   * @param addsWords whether what the row says becomes a remark of the call
   */
  settle(
    row: NightLogRowView,
    { call, note, addsWords }: { call: CallRow | null; note: string; addsWords: boolean },
  ): Promise<boolean> {
    const rowId = row.id;
    if (rowId === null) return Promise.resolve(false);
    // Both keep their ids over every attempt, so that a repeat adds no second remark.
    const remark = { commandId: newId(), text: wordsOf(row) };
    const settlement = { commandId: newId(), callId: call?.id ?? null, note };
    const work = async (): Promise<void> => {
      if (call && addsWords) {
        await this.api.call('addRemark', { params: { callId: call.id }, body: remark });
      }
      await this.api.call('settleNightLogRow', { params: { rowId }, body: settlement });
      this.known.update((rows) => rows?.filter(({ id }) => id !== rowId) ?? null);
      this.taking.forget(rowId);
    };
    return this.attempt(work);
  }

  dismissSetback(): void {
    this.stopped.set(null);
  }

  private async attempt(work: () => Promise<void>): Promise<boolean> {
    this.pending.update((count) => count + 1);
    this.stopped.set(null);
    try {
      await work();
      return true;
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      const mayRetry = error.code === 'no-connection' || error.code === 'busy';
      // Somebody else was quicker: the list is old.
      if (error.code === 'already-used') await this.fetch();
      this.stopped.set({
        words: error.message,
        retry: mayRetry ? async () => void (await this.attempt(work)) : null,
      });
      return false;
    } finally {
      this.pending.update((count) => count - 1);
    }
  }
}

/** Everything that stands in a row, in one line. */
export const wordsOf = (row: NightLogRowView, log?: NightLogDto | null): string => {
  const from = log ? ` of ${log.fileName}` : '';
  const cells = row.cells.map((cell) => cell.trim()).filter((cell) => cell !== '');
  return `Night log, line ${row.line}${from}: ${cells.join(' · ')}`.slice(0, 2000);
};
