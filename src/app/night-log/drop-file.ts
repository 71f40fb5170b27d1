import {
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  input,
  output,
  signal,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';

/** Takes one file, chosen or dropped. */
@Component({
  selector: 'thaw-drop-file',
  imports: [MatIcon],
  template: `
    <div
      class="zone"
      [class.over]="isOver()"
      (dragenter)="drag($event)"
      (dragover)="drag($event)"
      (dragleave)="isOver.set(false)"
      (drop)="drop($event)"
    >
      <button type="button" class="plain main" [disabled]="busyName() !== null" (click)="choose()">
        <mat-icon svgIcon="upload" aria-hidden="true" /> Choose a night log <kbd>O</kbd>
      </button>
      <p>or drop it here. A CSV file of up to 12 MB; nothing is imported yet.</p>
      <input
        #file
        type="file"
        class="visually-hidden"
        tabindex="-1"
        aria-label="Night log"
        accept=".csv,.txt,.tsv,text/csv,text/plain,text/tab-separated-values"
        (change)="pick(file)"
      />
      <p class="busy" role="status">
        @if (busyName(); as name) {
          <mat-icon svgIcon="hourglass-top" aria-hidden="true" /> Sending and reading {{ name }}…
        }
      </p>
    </div>
  `,
  styleUrls: ['../intake/fields.scss', './drop-file.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DropFile {
  /** The name of the file that is on its way. */
  readonly busyName = input<string | null>(null);
  readonly chosen = output<File>();

  private readonly field = viewChild.required<ElementRef<HTMLInputElement>>('file');
  protected readonly isOver = signal(false);

  choose(): void {
    this.field().nativeElement.click();
  }

  protected pick(field: HTMLInputElement): void {
    const file = field.files?.[0];
    // The same file may be chosen again, after it was exported anew.
    field.value = '';
    if (file) this.chosen.emit(file);
  }

  protected drag(event: DragEvent): void {
    if (!event.dataTransfer?.types.includes('Files')) return;
    event.preventDefault();
    this.isOver.set(true);
  }

  protected drop(event: DragEvent): void {
    event.preventDefault();
    this.isOver.set(false);
    const file = event.dataTransfer?.files[0];
    if (file && this.busyName() === null) this.chosen.emit(file);
  }
}
