import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  input,
  model,
  output,
  viewChild,
} from '@angular/core';

export interface Choice<T extends string> {
  readonly value: T;
  readonly words: string;
  /** What follows from it, in a smaller line. */
  readonly means?: string;
}

let forms = 0;

/** A form of the technician's phone: one of some large choices, a few words, and one button to send it. */
@Component({
  selector: 'thaw-choice-form',
  template: `
    <form (submit)="$event.preventDefault(); submitted.emit()" novalidate>
      <h1 #title tabindex="-1">{{ heading() }}</h1>
      <ng-content select="[intro]" />
      <fieldset>
        <legend>{{ legend() }}</legend>
        @for (one of choices(); track one.value) {
          <label class="choice" [class.chosen]="choice() === one.value">
            <input
              type="radio"
              [name]="name"
              [checked]="choice() === one.value"
              (change)="choice.set(one.value)"
            />
            <span
              >{{ one.words }}
              @if (one.means) {
                <span class="soft">{{ one.means }}</span>
              }
            </span>
          </label>
        }
      </fieldset>
      <label class="field">
        {{ noteLabel() }}
        <textarea
          #field
          [rows]="noteRows()"
          [attr.maxlength]="mostNote()"
          [value]="note()"
          (input)="note.set(field.value)"
        ></textarea>
      </label>
      <ng-content />
      @if (wrong()) {
        <p class="wrong" role="alert">{{ wrong() }}</p>
      }
      <ng-content select="[help]" />
      <div class="bar">
        <button type="button" class="second" (click)="closed.emit()">Back</button>
        <button type="submit" class="first" [disabled]="isBusy()">{{ submitWords() }}</button>
      </div>
    </form>
  `,
  styleUrl: './choice-form.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ChoiceForm<T extends string> {
  readonly heading = input.required<string>();
  readonly legend = input.required<string>();
  readonly choices = input.required<readonly Choice<T>[]>();
  readonly choice = model.required<T | null>();
  readonly noteLabel = input('A few words for the desk');
  readonly noteRows = input(2);
  /** The most characters that the contract takes. */
  readonly mostNote = input.required<number>();
  readonly note = model.required<string>();
  readonly submitWords = input.required<string>();
  readonly isBusy = input(false);
  /** Why it was not sent; '' while nothing is wrong. */
  readonly wrong = input.required<string>();

  readonly submitted = output();
  readonly closed = output();

  protected readonly name = `choice-${++forms}`;
  private readonly title = viewChild.required<ElementRef<HTMLElement>>('title');

  constructor() {
    afterNextRender(() => this.title().nativeElement.focus());
  }
}
