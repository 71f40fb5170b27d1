import {
  ChangeDetectionStrategy,
  Component,
  computed,
  inject,
  output,
  signal,
} from '@angular/core';
import { TimeField } from '../intake/time-field';
import { FileImport } from './file-import';
import { MOST_AREAS, MOST_FILE_BYTES } from './geojson-areas';

/** Outage areas from a file: what is in it, when the power went where the file does not say, saving. */
@Component({
  selector: 'thaw-area-import',
  imports: [TimeField],
  templateUrl: './area-import.html',
  styleUrls: ['./map-panel.scss', './area-import.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AreaImport {
  protected readonly files = inject(FileImport);
  readonly closed = output();
  /** The person wants to see all that was read on the map. */
  readonly read = output();

  protected readonly isOver = signal(false);
  protected readonly limits = `GeoJSON of up to ${MOST_FILE_BYTES / 1e6} MB and ${MOST_AREAS} areas`;
  protected readonly saveWords = computed(() => {
    const count = this.files.chosen().length;
    return count === 1 ? 'Save 1 area' : `Save ${count} areas`;
  });

  protected async take(file: File | undefined): Promise<void> {
    if (!file) return;
    await this.files.open(file);
    if (this.files.rows().length > 0) this.read.emit();
  }

  protected drop(event: DragEvent): void {
    event.preventDefault();
    this.isOver.set(false);
    void this.take(event.dataTransfer?.files[0]);
  }

  protected drag(event: DragEvent): void {
    event.preventDefault();
    this.isOver.set(true);
  }

  protected async save(): Promise<void> {
    if (await this.files.save()) this.closed.emit();
  }
}
