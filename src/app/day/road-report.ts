import { ChangeDetectionStrategy, Component, inject, input, output, signal } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { Api, newId } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { type Choice, ChoiceForm } from './choice-form';
import { RingDesk } from './ring-desk';

type Kind = 'closed' | 'flooded';
const KINDS: readonly Choice<Kind>[] = [
  { value: 'closed', words: 'Closed: barrier, tree, line down', means: 'Keep away from a line.' },
  { value: 'flooded', words: 'Flooded' },
];

/** A road that nobody passes, told from where the van stands. The desk looks at it before routes go round. */
@Component({
  selector: 'thaw-road-report',
  imports: [ChoiceForm, RingDesk],
  template: `
    <thaw-choice-form
      heading="Report a blocked road"
      legend="What is it?"
      [choices]="kinds"
      [(choice)]="kind"
      [mostNote]="500"
      [(note)]="notes"
      [submitWords]="isBusy() ? 'Sending…' : 'Report it'"
      [isBusy]="isBusy()"
      [wrong]="wrong()"
      (submitted)="send()"
      (closed)="closed.emit()"
    >
      <p intro>
        Stop where it is safe first; never drive into water. The road beside you is reported from
        where this phone is; the desk confirms it before routes go round it.
      </p>
      @if (hasNoPlace()) {
        <thaw-ring-desk help />
      }
    </thaw-choice-form>
  `,
  styles: ':host { display: contents; }',
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
  protected readonly hasNoPlace = signal(false);
  /** The report that was sent last; a repeat of the same is the same command. */
  private last = { content: '', commandId: '', stormRoadId: '' };

  protected async send(): Promise<void> {
    const kind = this.kind();
    if (kind === null) return this.wrong.set('Choose what it is first.');
    if (this.isBusy()) return;
    this.wrong.set('');
    this.isBusy.set(true);
    try {
      const at = await this.here()();
      this.hasNoPlace.set(!at);
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
