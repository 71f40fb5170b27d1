import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  signal,
  untracked,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatCheckbox } from '@angular/material/checkbox';
import type { MeasuredVisitsDto, Settings } from '@shared/contract/office';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { StackedTable } from './stacked-table';

/** What finished visits say of the time at a stop: looked at first, then used or not. */
@Component({
  selector: 'thaw-measured-visits',
  imports: [MatButton, MatCheckbox, StackedTable],
  template: `
    <section aria-labelledby="visits-title">
      <h2 id="visits-title">Time at a stop, measured by your own visits</h2>
      <p class="lead">
        From arrival to finish, beside the time at a stop that is set above and the units of the
        call: all visits, those with one likely cause, and those of one technician beside their
        causes. 8 visits move a figure half way. A cause is planned with half to double the time, a
        technician with 75 to 135 %; visits without access, under 5 minutes or over 5 hours are left
        out. These bounds are our estimate.
      </p>
      <mat-checkbox [checked]="isUsed()" [disabled]="isBusy()" (change)="use($event.checked)">
        Use these times for routes and arrivals
      </mat-checkbox>
      @if (rows().length > 0) {
        <div class="scroll">
          <table class="stacks" thawStacks>
            <thead>
              <tr>
                <th scope="col">Visits</th>
                <th scope="col" class="number">How many</th>
                <th scope="col" class="number">Against what was expected</th>
              </tr>
            </thead>
            <tbody>
              @for (row of rows(); track row.key) {
                <tr>
                  <th scope="row">{{ row.name }}</th>
                  <td class="number" data-label="How many">{{ row.visits }}</td>
                  <td class="number" data-label="Against what was expected">{{ row.words }}</td>
                </tr>
              }
            </tbody>
          </table>
        </div>
      } @else if (visits()) {
        <p class="soft">No finished visit has told anything yet.</p>
      }
      @if (leftOut()) {
        <p class="soft">Left out: {{ leftOut() }}.</p>
      }
      <div class="actions">
        <button matButton type="button" [disabled]="isBusy()" (click)="read()">Look again</button>
        <p class="trouble" role="alert">{{ trouble() }}</p>
      </div>
    </section>
  `,
  styleUrls: ['./parts.scss', './measured-speeds.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MeasuredVisits {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly announce = inject(Announce);

  protected readonly visits = signal<MeasuredVisitsDto | null>(null);
  protected readonly trouble = signal('');
  protected readonly isBusy = signal(false);
  protected readonly isUsed = computed(() => this.session.settings()?.usesMeasuredVisits ?? false);
  protected readonly rows = computed(() => {
    const visits = this.visits();
    if (!visits || visits.visits === 0) return [];
    return [
      { key: 'all', ...visits.all },
      ...visits.byCause.map((one) => ({ key: `cause ${one.name}`, ...one })),
      ...visits.byTechnician.map((one) => ({ key: `technician ${one.name}`, ...one })),
    ].map(({ key, name, visits: count, factor }) => ({
      key,
      name,
      visits: count,
      words: factorWords(factor),
    }));
  });
  protected readonly leftOut = computed(() =>
    (this.visits()?.leftOut ?? []).map(({ why, visits }) => `${visits} ${why}`).join(', '),
  );

  constructor() {
    effect(() => {
      const settings = this.session.settings();
      if (settings) untracked(() => void this.read());
    });
  }

  protected async read(): Promise<void> {
    await this.attempt(async () => {
      this.visits.set(await this.api.call('measuredVisits'));
    });
  }

  protected async use(isUsed: boolean): Promise<void> {
    const settings = this.session.settings();
    if (!settings || this.isBusy()) return;
    await this.attempt(async () => {
      const after = await this.api.call('changeSettings', {
        body: { commandId: newId(), version: settings.version, usesMeasuredVisits: isUsed },
      });
      this.session.takeSettings(after);
      this.announce.notice(
        isUsed ? 'Measured times at stops are used.' : 'The time at a stop is the one that is set.',
      );
    });
  }

  private async attempt(work: () => Promise<void>): Promise<void> {
    this.isBusy.set(true);
    this.trouble.set('');
    try {
      await work();
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (error.code === 'stale-version') this.session.takeSettings(error.current as Settings);
      this.trouble.set(problemWords(error));
    } finally {
      this.isBusy.set(false);
    }
  }
}

function factorWords(factor: number): string {
  const percent = Math.round(Math.abs(factor - 1) * 100);
  if (percent === 0) return 'as expected';
  return `${percent} % ${factor > 1 ? 'longer' : 'shorter'}`;
}
