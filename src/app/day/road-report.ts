import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  inject,
  input,
  output,
  signal,
  viewChild,
} from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { Api, newId } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';

const KINDS = [
  { kind: 'closed', words: 'Closed: barrier, tree, line down' },
  { kind: 'flooded', words: 'Flooded' },
] as const;
type Kind = (typeof KINDS)[number]['kind'];

/** A road that nobody passes, told from where the van stands. The desk looks at it before routes go round. */
@Component({
  selector: 'thaw-road-report',
  template: `
    <form (submit)="$event.preventDefault(); send()" novalidate>
      <h1 #title tabindex="-1">Report a blocked road</h1>
      <p>
        Stop where it is safe first. The road beside you is reported from where this phone is; the
        desk confirms it before routes go round it.
      </p>
      <fieldset>
        <legend>What is it?</legend>
        @for (one of kinds; track one.kind) {
          <label class="choice" [class.chosen]="kind() === one.kind">
            <input
              type="radio"
              name="blocked"
              [checked]="kind() === one.kind"
              (change)="kind.set(one.kind)"
            />
            {{ one.words }}
          </label>
        }
      </fieldset>
      <label class="field">
        A few words for the desk
        <textarea
          #field
          rows="2"
          maxlength="500"
          [value]="notes()"
          (input)="notes.set(field.value)"
        ></textarea>
      </label>
      @if (wrong()) {
        <p class="wrong" role="alert">{{ wrong() }}</p>
      }
      <div class="bar">
        <button type="button" class="second" (click)="closed.emit()">Back</button>
        <button type="submit" class="first" [disabled]="isBusy()">
          {{ isBusy() ? 'Sending…' : 'Report it' }}
        </button>
      </div>
    </form>
  `,
  styleUrl: './day-form.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RoadReport {
  private readonly api = inject(Api);

  /** Where the phone is; `null` when it does not say. */
  readonly here = input.required<() => Promise<LonLat | null>>();
  readonly sent = output();
  readonly closed = output();

  protected readonly kinds = KINDS;
  protected readonly kind = signal<Kind | null>(null);
  protected readonly notes = signal('');
  protected readonly wrong = signal('');
  protected readonly isBusy = signal(false);
  private readonly title = viewChild.required<ElementRef<HTMLElement>>('title');
  /** The report that was sent last; a repeat of the same is the same command. */
  private last = { content: '', commandId: '', stormRoadId: '' };

  constructor() {
    afterNextRender(() => this.title().nativeElement.focus());
  }

  protected async send(): Promise<void> {
    const kind = this.kind();
    if (kind === null) return this.wrong.set('Choose what it is first.');
    if (this.isBusy()) return;
    this.wrong.set('');
    this.isBusy.set(true);
    try {
      const at = await this.here()();
      if (!at) {
        return this.wrong.set(
          'This phone does not say where it is, so the road is not known. Ring the desk.',
        );
      }
      const content = { kind, at: [at[0], at[1]] as [number, number], notes: this.notes().trim() };
      const key = JSON.stringify([content.kind, content.notes]);
      if (this.last.content !== key)
        this.last = { content: key, commandId: newId(), stormRoadId: newId() };
      const { commandId, stormRoadId } = this.last;
      await this.api.call('reportStormRoad', { body: { commandId, stormRoadId, ...content } });
      this.sent.emit();
    } catch (error) {
      // What was typed stays; without signal it is sent again by the same button.
      if (!(error instanceof ProblemError)) throw error;
      this.wrong.set(problemWords(error));
    } finally {
      this.isBusy.set(false);
    }
  }
}
