import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  ElementRef,
  inject,
  signal,
  untracked,
} from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatIcon } from '@angular/material/icon';
import { MatInput } from '@angular/material/input';
import type { Settings } from '@shared/contract/office';
import { Announce } from '../core/announce';
import { Api } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { FAULTY, focusFirst, OVERTAKEN } from './focus-first';
import { inWords, showFaults } from './form-words';
import { type Overtaken, overtaken } from './merge';
import { MeasuredSpeeds } from './measured-speeds';
import { MeasuredVisits } from './measured-visits';
import { OrderId } from './order-id';
import { StorePlace } from './store-place';
import {
  SETTING_FIELDS,
  SETTING_GROUPS,
  type SettingField,
  type SettingKey,
  settingFault,
  settingText,
  settingValue,
} from './settings-fields';

/** Everything that the office may set, with what it means and where its first value comes from. */
@Component({
  selector: 'thaw-settings-part',
  imports: [
    MatButton,
    MatFormFieldModule,
    MatIcon,
    MatInput,
    MeasuredSpeeds,
    MeasuredVisits,
    ReactiveFormsModule,
    StorePlace,
  ],
  templateUrl: './settings-part.html',
  styleUrls: ['./parts.scss', './settings-part.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SettingsPart {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly announce = inject(Announce);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  private readonly order = new OrderId();

  protected readonly groups = SETTING_GROUPS;
  protected readonly titles = SETTING_GROUPS.map(({ title }) => title);
  protected readonly form = new FormGroup(
    Object.fromEntries(
      SETTING_FIELDS.map((field) => [
        field.key,
        new FormControl('', {
          nonNullable: true,
          validators: inWords<string>((text) => settingFault(field, text)),
        }),
      ]),
    ) as Record<SettingKey, FormControl<string>>,
  );
  /** The version that this form was filled from. */
  private readonly base = signal<Settings | null>(null);
  protected readonly isBusy = signal(false);
  protected readonly trouble = signal<string | null>(null);
  protected readonly overtaken = signal<readonly Overtaken<SettingKey>[]>([]);
  protected readonly labels = new Map(SETTING_FIELDS.map(({ key, label }) => [key, label]));
  protected readonly isKnown = computed(() => this.base() !== null);

  constructor() {
    effect(() => {
      const settings = this.session.settings();
      untracked(() => {
        // Whoever is typing keeps their version; saving then tells what has changed.
        if (settings && !this.isChanged()) this.fill(settings);
      });
    });
  }

  /** Brings a group of settings into sight, and the keyboard to it. */
  protected goTo(group: number): void {
    const legend = this.host.nativeElement.querySelectorAll<HTMLElement>('legend')[group];
    legend?.focus({ preventScroll: true });
    legend?.scrollIntoView?.({ block: 'start' });
  }

  protected isChanged(): boolean {
    return this.changedFields().length > 0;
  }

  protected async save(): Promise<void> {
    const base = this.base();
    if (!base || this.isBusy()) return;
    this.trouble.set(null);
    this.form.markAllAsTouched();
    if (this.form.invalid) {
      this.trouble.set('Some fields need another look.');
      focusFirst(this.host.nativeElement, FAULTY);
      return;
    }
    const changes = Object.fromEntries(
      this.changedFields().map((field) => [field.key, settingValue(field, this.text(field.key))]),
    );
    const asked = { version: base.version, ...changes };
    this.isBusy.set(true);
    try {
      const settings = await this.api.call('changeSettings', {
        body: { commandId: this.order.idFor(asked), ...asked },
      });
      this.order.done();
      this.overtaken.set([]);
      this.fill(settings);
      this.session.takeSettings(settings);
      this.announce.notice('The settings are saved.');
    } catch (error) {
      this.refused(error, base);
    } finally {
      this.isBusy.set(false);
    }
  }

  /** Back to what is saved. */
  protected undo(): void {
    const base = this.base();
    if (base) this.fill(base);
    this.overtaken.set([]);
    this.trouble.set(null);
  }

  private refused(error: unknown, base: Settings): void {
    if (error instanceof ProblemError && error.code === 'stale-version') {
      this.takeTheirs(base, error.current as Settings);
    } else if (!(error instanceof ProblemError) || !showFaults(this.form, error, OWN_WORDS)) {
      this.trouble.set(problemWords(error));
    }
  }

  /** Fields that this person has not touched follow; what they typed stays, and is told. */
  private takeTheirs(base: Settings, theirs: Settings): void {
    const field = (key: SettingKey): SettingField => SETTING_FIELDS.find((one) => one.key === key)!;
    const mine = new Map(this.changedFields().map(({ key }) => [key, this.text(key)]));
    this.overtaken.set(
      overtaken(
        SETTING_FIELDS.map(({ key }) => key),
        {
          base: (key) => settingText(field(key), base),
          theirs: (key) => settingText(field(key), theirs),
          mine: (key) => mine.get(key) ?? settingText(field(key), base),
        },
      ),
    );
    this.fill(theirs);
    for (const [key, text] of mine) this.form.controls[key].setValue(text);
    this.session.takeSettings(theirs);
    this.trouble.set(null);
    focusFirst(this.host.nativeElement, OVERTAKEN);
  }

  private fill(settings: Settings): void {
    this.base.set(settings);
    for (const field of SETTING_FIELDS) {
      this.form.controls[field.key].reset(settingText(field, settings));
    }
  }

  private changedFields(): readonly SettingField[] {
    const base = this.base();
    if (!base) return [];
    return SETTING_FIELDS.filter((field) => this.text(field.key) !== settingText(field, base));
  }

  private text(key: SettingKey): string {
    return this.form.controls[key].value;
  }
}

const OWN_WORDS: Readonly<Record<string, string>> = Object.fromEntries(
  SETTING_FIELDS.map((field) => [field.key, settingFault(field, '') ?? 'The server refused this.']),
);
