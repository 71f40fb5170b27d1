import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  Injector,
  signal,
  viewChild,
} from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import type { PlanPrices } from '@shared/contract/plan-prices';
import type { PlanTrialDto } from '@shared/contract/routes';
import type { Settings } from '@shared/contract/office';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { PRICE_FIELDS } from '../office/plan-settings';
import {
  type SettingField,
  settingFault,
  settingText,
  settingValue,
} from '../office/settings-fields';
import { comparedFigures } from './plan-comparison';
import { PlanFiguresTable } from './plan-figures-table';

const SECONDS = 1;

/** Tries other weights on the storm as it is: two plans side by side, of which nothing is kept. */
@Component({
  selector: 'thaw-try-dialog',
  imports: [
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    PlanFiguresTable,
  ],
  templateUrl: './try-dialog.html',
  styleUrls: ['../intake/fields.scss', './try-dialog.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TryDialog {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly session = inject(Session);
  private readonly announce = inject(Announce);
  private readonly injector = inject(Injector);
  private readonly results = viewChild<ElementRef<HTMLElement>>('results');

  protected readonly fields = PRICE_FIELDS;
  /** What was typed, by field; the others stand as they are set. */
  private readonly typed = signal<ReadonlyMap<SettingField['key'], string>>(new Map());
  protected readonly trial = signal<PlanTrialDto | null>(null);
  private readonly triedPrices = signal<Partial<PlanPrices>>({});
  protected readonly isBusy = signal(false);
  protected readonly trouble = signal('');

  protected readonly mayKeep = computed(() => {
    const role = this.session.user()?.role;
    return role === 'manager' || role === 'owner';
  });
  protected readonly changed = computed(() =>
    this.fields.filter((field) => this.textOf(field) !== this.setText(field)),
  );
  private readonly isFaulty = computed(() => this.fields.some((field) => this.faultOf(field)));
  protected readonly lines = computed(() => {
    const trial = this.trial();
    if (!trial) return [];
    const inForce = comparedFigures(trial.tried, trial.inForce);
    const { asSet, tried } = trial;
    const lines = comparedFigures(tried, asSet).map((line) => ({
      label: line.label,
      figures: [
        inForce.find(({ label }) => label === line.label)?.inForce ?? '',
        line.inForce,
        line.proposed,
      ],
      difference: line.difference,
      turn: line.turn,
    }));
    const moved = ['', String(asSet.moved), String(tried.moved)];
    return [
      ...lines,
      { label: 'Stops moved', figures: moved, difference: '', turn: 'neither' as const },
    ];
  });
  protected readonly callWords = computed(() => {
    const trial = this.trial();
    if (!trial) return [];
    const list = (ids: readonly string[]): string =>
      ids.map((id) => String(this.board.calls().get(id)?.number ?? '?')).join(', ');
    return [
      ...(trial.onlyTried.length > 0
        ? [`Only with the tried weights on a route: ${list(trial.onlyTried)}.`]
        : []),
      ...(trial.onlyAsSet.length > 0
        ? [`Only as it is set on a route: ${list(trial.onlyAsSet)}.`]
        : []),
    ];
  });

  protected textOf(field: SettingField): string {
    return this.typed().get(field.key) ?? this.setText(field);
  }

  protected faultOf(field: SettingField): string | null {
    return settingFault(field, this.textOf(field));
  }

  protected isChanged(field: SettingField): boolean {
    return this.changed().includes(field);
  }

  protected type(field: SettingField, text: string): void {
    this.typed.update((typed) => new Map(typed).set(field.key, text));
  }

  protected async tryThem(): Promise<void> {
    const stormId = this.board.storm()?.id;
    if (stormId === undefined || this.isBusy()) return;
    if (this.isFaulty()) return this.trouble.set('Some fields need another look.');
    const prices = this.prices();
    await this.attempt(async () => {
      const trial = await this.api.call('tryPrices', {
        params: { stormId },
        body: { seconds: SECONDS, prices },
      });
      this.triedPrices.set(prices);
      this.trial.set(trial);
      this.announce.say('Tried: the figures stand side by side.');
      this.showResults();
    });
  }

  /** The weights that were tried become those that are set; no route changes by it. */
  protected async keep(): Promise<void> {
    const settings = this.session.settings();
    if (!settings || this.isBusy()) return;
    await this.attempt(async () => {
      const after = await this.api.call('changeSettings', {
        body: { commandId: newId(), version: settings.version, ...this.triedPrices() },
      });
      this.session.takeSettings(after);
      this.typed.set(new Map());
      this.trial.set(null);
      this.announce.notice('The weights are set. The next proposal counts with them.');
    });
  }

  /** On a small screen the fields fill the dialog, and what was found lies below its edge. */
  private showResults(): void {
    afterNextRender(() => this.results()?.nativeElement.scrollIntoView?.({ block: 'nearest' }), {
      injector: this.injector,
    });
  }

  private prices(): Partial<PlanPrices> {
    return Object.fromEntries(
      this.changed().map((field) => [field.key, settingValue(field, this.textOf(field))]),
    );
  }

  private setText(field: SettingField): string {
    const settings = this.session.settings();
    return settings ? settingText(field, settings) : '';
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
