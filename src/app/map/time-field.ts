import { ChangeDetectionStrategy, Component, input, output } from '@angular/core';

/** A moment that is typed as people say it, with what it was understood to mean below. */
@Component({
  selector: 'thaw-time-field',
  template: `
    <label [for]="key()">{{ label() }}</label>
    <input
      #field
      type="text"
      autocomplete="off"
      [id]="key()"
      [placeholder]="example()"
      [attr.aria-describedby]="key() + '-words'"
      [attr.aria-invalid]="trouble() ? true : null"
      [value]="text()"
      (input)="typed.emit(field.value)"
    />
    <span [id]="key() + '-words'" class="note">{{ trouble() || meaning() }}</span>
  `,
  styles: `
    :host {
      display: grid;
      gap: 2px;
      align-content: start;
    }
    label {
      font-weight: 500;
    }
    input {
      inline-size: 100%;
      min-block-size: 30px;
      padding: 3px 8px;
      border: 1px solid var(--thaw-rule-strong);
      border-radius: var(--thaw-radius);
      background: var(--thaw-ground);
      color: var(--thaw-ink);
      font-size: var(--thaw-text);
    }
    .note {
      color: var(--thaw-ink-soft);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TimeField {
  /** The id of its input; one of a kind on the page. */
  readonly key = input.required<string>();
  readonly label = input.required<string>();
  readonly example = input('');
  readonly text = input.required<string>();
  /** Why the text cannot be read; empty when it can. */
  readonly trouble = input('');
  /** What the text means, such as "Thu 22:30, 4 h ago". */
  readonly meaning = input('');
  readonly typed = output<string>();
}
