import { ChangeDetectionStrategy, Component, input, output } from '@angular/core';

export interface Choice<T> {
  readonly value: T;
  readonly label: string;
}

let groups = 0;

/** One answer out of a few, all in sight: arrow keys or a digit choose. */
@Component({
  selector: 'thaw-choices',
  template: `
    <fieldset>
      <legend>{{ legend() }}</legend>
      <div class="row">
        @for (choice of choices(); track choice.label; let i = $index) {
          <label [class.chosen]="choice.value === value()">
            <input
              type="radio"
              [name]="name"
              [checked]="choice.value === value()"
              (change)="chosen.emit(choice.value)"
            />
            <span class="digit" aria-hidden="true">{{ i + 1 }}</span>
            {{ choice.label }}
          </label>
        }
      </div>
    </fieldset>
  `,
  styleUrl: './choices.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '(keydown)': 'chooseByDigit($event)' },
})
export class Choices<T extends string | number | boolean | null> {
  readonly legend = input.required<string>();
  readonly choices = input.required<readonly Choice<T>[]>();
  readonly value = input.required<T>();
  readonly chosen = output<T>();

  /** Radio buttons of one group share a name that no other group has. */
  protected readonly name = `choices-${++groups}`;

  protected chooseByDigit(event: KeyboardEvent): void {
    if (event.ctrlKey || event.altKey || event.metaKey) return;
    const choice = this.choices()[Number(event.key) - 1];
    if (!/^[1-9]$/.test(event.key) || !choice) return;
    event.preventDefault();
    event.stopPropagation();
    this.chosen.emit(choice.value);
    const radios = (event.currentTarget as HTMLElement).querySelectorAll('input');
    radios[Number(event.key) - 1]?.focus();
  }
}
