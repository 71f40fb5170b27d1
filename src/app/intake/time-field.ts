import { ChangeDetectionStrategy, Component, computed, inject, input, output } from '@angular/core';
import type { Instant } from '@shared/domain/instant';
import { fromNowWords } from '../board/time-words';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';

/** A moment that is typed as people say it, with what it was understood to mean below. */
@Component({
  selector: 'thaw-time-field',
  template: `
    <label [for]="key()"
      >{{ label() }}
      @if (hint()) {
        <span class="hint">{{ hint() }}</span>
      }
    </label>
    <input
      #field
      type="text"
      autocomplete="off"
      [id]="key()"
      [placeholder]="example()"
      [attr.aria-describedby]="key() + '-words'"
      [attr.aria-invalid]="trouble() ? true : null"
      [value]="shown()"
      (input)="typed.emit(field.value)"
      (blur)="left.emit()"
    />
    <p [id]="key() + '-words'" class="note" [class.error]="trouble()">
      {{ trouble() || meaning() }}
    </p>
  `,
  styleUrl: './time-field.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TimeField {
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);

  /** The id of its input; one of a kind on the page. */
  readonly key = input.required<string>();
  readonly label = input.required<string>();
  /** Beside the label: how it may be typed. */
  readonly hint = input('');
  readonly example = input('');
  readonly text = input.required<string>();
  /** The moment that the text means, or that stands without anybody having typed; `null` when there is none. */
  readonly at = input.required<Instant | null>();
  /** Why the text cannot be read; empty when it can. */
  readonly trouble = input('');
  readonly typed = output<string>();
  readonly left = output();

  protected readonly shown = computed(() => {
    const at = this.at();
    return this.text() !== '' || at === null ? this.text() : this.zone.dayTime(at);
  });
  protected readonly meaning = computed(() => {
    const at = this.at();
    return at === null ? '' : `${this.zone.dayTime(at)}, ${fromNowWords(at, this.clock.now())}`;
  });
}
