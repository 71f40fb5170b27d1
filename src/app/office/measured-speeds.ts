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
import { MatDialog } from '@angular/material/dialog';
import type { MeasuredSpeedsDto, Settings } from '@shared/contract/office';
import type { RoadClass } from '@shared/domain/roads/road-class';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { dateTime, Zone } from '../core/zone';
import { ConfirmDialog } from './confirm-dialog';
import { StackedTable } from './stacked-table';

const KM_PER_MILE = 1.609344;

const CLASS_WORDS: Readonly<Record<RoadClass, string>> = {
  motorway: 'Freeways',
  trunk: 'Expressways',
  primary: 'Main highways',
  secondary: 'Secondary highways',
  tertiary: 'Connecting roads',
  unclassified: 'Minor country roads',
  residential: 'Streets in towns',
  service: 'Driveways and alleys',
  ferry: 'Ferries',
};

/** What measured drives say of the speeds of roads: looked at first, then used or not. */
@Component({
  selector: 'thaw-measured-speeds',
  imports: [MatButton, MatCheckbox, StackedTable],
  templateUrl: './measured-speeds.html',
  styleUrls: ['./parts.scss', './measured-speeds.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MeasuredSpeeds {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly announce = inject(Announce);
  private readonly dialog = inject(MatDialog);
  private readonly zone = inject(Zone);

  protected readonly speeds = signal<MeasuredSpeedsDto | null>(null);
  protected readonly trouble = signal('');
  protected readonly isBusy = signal(false);
  protected readonly isUsed = computed(() => this.session.settings()?.usesMeasuredSpeeds ?? false);
  protected readonly since = computed(() => {
    const since = this.speeds()?.since ?? null;
    return since === null ? 'the first drive' : dateTime(since, this.zone.name());
  });
  protected readonly rows = computed(() =>
    (this.speeds()?.classes ?? []).map(({ roadClass, drives, factor, usualKmh }) => ({
      name: CLASS_WORDS[roadClass],
      drives: drives.toFixed(1),
      usual: Math.round(usualKmh / KM_PER_MILE),
      measured: Math.round((usualKmh * factor) / KM_PER_MILE),
      correction: factor === 1 ? 'none' : `${factor > 1 ? '+' : '−'}${percent(factor)} %`,
    })),
  );
  protected readonly leftOut = computed(() =>
    (this.speeds()?.leftOut ?? []).map(({ why, drives }) => `${drives} ${why}`).join(', '),
  );

  constructor() {
    effect(() => {
      const settings = this.session.settings();
      if (settings) untracked(() => void this.read());
    });
  }

  protected async read(): Promise<void> {
    await this.attempt(async () => {
      this.speeds.set(await this.api.call('measuredSpeeds'));
    });
  }

  protected async use(isUsed: boolean): Promise<void> {
    const settings = this.session.settings();
    if (!settings || this.isBusy()) return;
    await this.attempt(async () => {
      const after = await this.api.call('changeSettings', {
        body: { commandId: newId(), version: settings.version, usesMeasuredSpeeds: isUsed },
      });
      this.session.takeSettings(after);
      this.announce.notice(
        isUsed
          ? 'Measured speeds are used. Routes and arrival times follow.'
          : 'Measured speeds are not used. Routes and arrival times follow.',
      );
    });
  }

  protected reset(): void {
    this.dialog
      .open<ConfirmDialog, ConfirmDialog['data'], boolean>(ConfirmDialog, {
        data: {
          title: 'Learn speeds anew?',
          words:
            'Drives measured so far no longer count. They stay in the record, and cannot be made to count again.',
          action: 'Learn anew',
        },
      })
      .afterClosed()
      .subscribe((isSure) => {
        if (isSure) void this.forget();
      });
  }

  private async forget(): Promise<void> {
    const settings = this.session.settings();
    if (!settings) return;
    await this.attempt(async () => {
      const after = await this.api.call('resetMeasuredSpeeds', {
        body: { commandId: newId(), version: settings.version },
      });
      this.session.takeSettings(after);
      this.announce.notice('Speeds are learned anew from now on.');
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

const percent = (factor: number): number => Math.round(Math.abs(factor - 1) * 100);
