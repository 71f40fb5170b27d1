import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  ElementRef,
  inject,
  Injector,
  input,
  linkedSignal,
  output,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { NightLogDto, NightLogRowView } from '@shared/contract/night-logs';
import { Announce } from '../core/announce';
import { Keys } from '../core/keys';
import { Zone } from '../core/zone';
import { SetbackBox } from '../ui/setback-box';
import { AsideActions, type AsideForm } from './aside-actions';
import { AsidesModel, wordsOf } from './asides-model';
import { IntakePrefill } from './intake-prefill';
import { RowsBeingTaken } from './rows-being-taken';

/** Rows that wait for a person, in the order of their lines: why, what came, what was understood. */
@Component({
  selector: 'thaw-aside-list',
  imports: [AsideActions, MatIcon, SetbackBox],
  templateUrl: './aside-list.html',
  styleUrls: ['../intake/fields.scss', './panel.scss', './aside-list.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AsideList {
  protected readonly model = inject(AsidesModel);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);
  private readonly prefill = inject(IntakePrefill);
  private readonly taking = inject(RowsBeingTaken);
  private readonly injector = inject(Injector);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef);

  readonly logs = input.required<readonly NightLogDto[]>();
  readonly closed = output();
  readonly callWanted = output<string>();

  private readonly title = viewChild<ElementRef<HTMLElement>>('title');

  /** The row that is open; when it is settled, the one that took its place. */
  protected readonly currentId = linkedSignal<readonly NightLogRowView[], string | null>({
    source: () => this.model.rows() ?? [],
    computation: (rows, previous) => {
      const before = previous?.value ?? null;
      if (before === null || rows.some(({ id }) => id === before)) return before;
      const was = previous?.source.findIndex(({ id }) => id === before) ?? 0;
      return rows[Math.min(Math.max(was, 0), rows.length - 1)]?.id ?? null;
    },
  });
  protected readonly form = linkedSignal<string | null, AsideForm>({
    source: () => this.currentId(),
    computation: () => 'none',
  });

  private readonly logOf = computed(() => new Map(this.logs().map((log) => [log.id, log])));
  protected readonly rows = computed(() =>
    (this.model.rows() ?? []).map((row) => {
      const understood = [
        row.name,
        row.phone,
        row.address,
        row.units,
        row.receivedAt === null ? '' : this.zone.dayTime(row.receivedAt),
      ].filter((part) => part !== '');
      return {
        row,
        id: row.id ?? `${row.logId}-${row.line}`,
        file: this.logOf().get(row.logId)?.fileName ?? '',
        understood: understood.length > 0 ? understood.join(', ') : 'nothing',
        taken: row.id === null ? null : this.model.takenCall(row.id),
      };
    }),
  );
  protected readonly current = computed(
    () => this.rows().find(({ id }) => id === this.currentId()) ?? null,
  );

  constructor() {
    const scope = 'Put aside';
    const has = (): boolean => this.current() !== null && !this.model.isBusy();
    inject(Keys).register(
      [
        {
          keys: 't',
          does: 'Take the call of the row',
          scope,
          when: has,
          run: () => void this.take(),
        },
        {
          keys: 'b',
          does: 'Say which call the row belongs to',
          scope,
          when: has,
          run: () => this.form.set('belongs'),
        },
        {
          keys: 'x',
          does: 'Nothing to do about the row',
          scope,
          when: has,
          run: () => this.form.set('nothing'),
        },
        {
          keys: 'Escape',
          does: 'Back to the rows',
          scope,
          inFields: true,
          when: () => this.form() !== 'none',
          run: () => this.leaveForm(),
        },
      ],
      inject(DestroyRef),
    );
  }

  focus(): void {
    this.title()?.nativeElement.focus();
  }

  protected open(id: string): void {
    this.currentId.set(this.currentId() === id ? null : id);
  }

  protected cellsOf(row: NightLogRowView): { title: string; text: string }[] {
    const columns = this.logOf().get(row.logId)?.columns ?? [];
    return row.cells.map((text, i) => ({
      title: columns[i]?.header || `Column ${i + 1}`,
      text: text.trim() === '' ? '(empty)' : text,
    }));
  }

  protected async take(): Promise<void> {
    const one = this.current();
    if (!one?.row.id) return;
    const { row } = one;
    const callId = await this.prefill.take({
      phone: row.phone,
      name: row.name,
      address: row.address,
      units: row.units,
      remark: wordsOf(row, this.logOf().get(row.logId)),
    });
    if (callId !== null) this.taking.add({ rowId: one.row.id, callId, line: row.line });
  }

  protected async settle(how: Parameters<AsidesModel['settle']>[1]): Promise<void> {
    const row = this.current()?.row;
    if (!row || !(await this.model.settle(row, how))) return;
    const left = this.model.rows()?.length ?? 0;
    this.announce.say(
      left === 0 ? 'Settled. No row waits any more.' : `Settled. ${left} still wait.`,
    );
    this.afterRender(() => this.focusCurrent());
  }

  protected leaveForm(): void {
    this.form.set('none');
    this.focusCurrent();
  }

  private focusCurrent(): void {
    const row = this.element.nativeElement.querySelector<HTMLElement>('.current [data-step]');
    if (row) row.focus();
    else this.focus();
  }

  private afterRender(act: () => void): void {
    afterNextRender(act, { injector: this.injector });
  }
}
