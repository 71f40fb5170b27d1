import {
  ChangeDetectionStrategy,
  Component,
  computed,
  inject,
  input,
  linkedSignal,
  output,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { ColumnGuess, NightLogRowView } from '@shared/contract/night-logs';
import { Zone } from '../core/zone';
import { OUTCOMES } from './night-log-words';

/** What would become of the rows: all that need a person first, then the first ones of the log. */
@Component({
  selector: 'thaw-log-preview',
  imports: [MatIcon],
  templateUrl: './log-preview.html',
  styleUrls: ['../intake/fields.scss', './log-preview.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LogPreview {
  private readonly zone = inject(Zone);

  readonly rows = input.required<readonly NightLogRowView[]>();
  readonly columns = input.required<readonly ColumnGuess[]>();
  readonly rowCount = input.required<number>();
  /** The call that a known row went into is wanted on the board. */
  readonly callWanted = output<string>();

  /** Lines whose cells are in sight; of another log none is. */
  private readonly opened = linkedSignal<string, ReadonlySet<number>>({
    source: () => this.rows()[0]?.logId ?? '',
    computation: () => new Set(),
  });

  private readonly shown = computed(() =>
    this.rows().map((row) => ({
      row,
      ...OUTCOMES[row.outcome],
      when: row.receivedAt === null ? '' : this.zone.dayTime(row.receivedAt),
      isOpen: this.opened().has(row.line),
    })),
  );
  protected readonly parts = computed(() => {
    const asides = this.shown().filter(({ row }) => row.outcome === 'aside');
    const others = this.shown().filter(({ row }) => row.outcome !== 'aside');
    return [
      { key: 'aside', title: `Would be put aside for a person: ${asides.length}`, rows: asides },
      {
        key: 'first',
        title:
          this.rowCount() > this.rows().length
            ? `The first rows of ${this.rowCount().toLocaleString('en-US')}`
            : 'The other rows',
        rows: others,
      },
    ].filter(({ rows }) => rows.length > 0);
  });

  protected toggle(line: number): void {
    this.opened.update((opened) => {
      const next = new Set(opened);
      if (!next.delete(line)) next.add(line);
      return next;
    });
  }

  /** The cells of a row under their titles; a row may have more cells than there are titles. */
  protected cellsOf({ cells }: NightLogRowView): { title: string; text: string }[] {
    return cells.map((text, i) => ({
      title: this.columns()[i]?.header || `Column ${i + 1}`,
      text: text.trim() === '' ? '(empty)' : text,
    }));
  }
}
