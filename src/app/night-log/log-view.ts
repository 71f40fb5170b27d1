import {
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  output,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { ColumnRole } from '@shared/domain/night-log/column-map';
import { Zone } from '../core/zone';
import { ColumnMapping } from './column-mapping';
import { LogPreview } from './log-preview';
import { NightLogModel } from './night-log-model';
import {
  countWords,
  encodingWords,
  isNothingNew,
  LOG_STATES,
  resultWords,
  rowWords,
} from './night-log-words';

/** One log: its columns to be confirmed, what would become of its rows, and its import. */
@Component({
  selector: 'thaw-log-view',
  imports: [ColumnMapping, LogPreview, MatIcon],
  templateUrl: './log-view.html',
  styleUrls: ['../intake/fields.scss', './panel.scss', './log-view.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LogView {
  protected readonly model = inject(NightLogModel);
  private readonly zone = inject(Zone);

  readonly closed = output();
  readonly callWanted = output<string>();
  readonly asidesWanted = output();

  private readonly title = viewChild<ElementRef<HTMLElement>>('title');

  protected readonly log = this.model.log;
  protected readonly isImporting = computed(() => this.log()?.state === 'importing');
  protected readonly about = computed(() => {
    const log = this.log();
    if (!log) return '';
    const who = log.uploadedBy === '' ? '' : ` by ${log.uploadedBy}`;
    return `${rowWords(log.rowCount)}, ${encodingWords(log.encoding)}, sent ${this.zone.dayTime(log.uploadedAt)}${who}`;
  });
  protected readonly stateWords = computed(() => {
    const log = this.log();
    return log ? LOG_STATES[log.state] : null;
  });
  protected readonly progress = computed(() => {
    const log = this.log();
    if (log?.state !== 'importing') return null;
    const percent = log.rowCount === 0 ? 0 : Math.floor((100 * log.doneCount) / log.rowCount);
    return {
      percent: Math.min(percent, 100),
      words: `${log.doneCount.toLocaleString('en-US')} of ${rowWords(log.rowCount)}`,
      counts: countWords(log.counts),
    };
  });
  protected readonly result = computed(() => {
    const log = this.log();
    return log?.state === 'imported'
      ? { words: resultWords(log), isNew: !isNothingNew(log.counts), aside: log.counts.aside }
      : null;
  });
  /** What an import would come to with the columns as they stand. */
  protected readonly forecast = computed(() => {
    const counts = this.model.preview()?.log.counts;
    return counts ? countWords(counts) : [];
  });
  protected readonly wouldAddNothing = computed(() => {
    const counts = this.model.preview()?.log.counts;
    return counts !== undefined && isNothingNew(counts);
  });
  protected readonly importWords = computed(() => {
    const log = this.log();
    const again = log?.state === 'read' ? '' : ' again';
    return `Import ${rowWords(log?.rowCount ?? 0)}${again}`;
  });
  protected readonly mayImport = computed(
    () => !this.isImporting() && !this.model.isStarting() && this.model.preview() !== null,
  );

  focus(): void {
    this.title()?.nativeElement.focus();
  }

  protected setRole({ index, role }: { index: number; role: ColumnRole }): void {
    this.model.setRole(index, role);
  }
}
