import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  inject,
  signal,
  untracked,
} from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import type { StormDto } from '@shared/contract/office';
import { firstValueFrom } from 'rxjs';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { DateTimePipe } from '../core/zone';
import { type Confirmation, ConfirmDialog } from './confirm-dialog';
import { filled, showFaults } from './form-words';
import { OrderId } from './order-id';
import { StackedTable } from './stacked-table';

/** Storms: the one that is open, those that were, and the next. */
@Component({
  selector: 'thaw-storms-part',
  imports: [
    DateTimePipe,
    MatButton,
    MatFormFieldModule,
    MatInput,
    ReactiveFormsModule,
    StackedTable,
  ],
  templateUrl: './storms-part.html',
  styleUrl: './parts.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StormsPart {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly board = inject(BoardStore);
  private readonly dialogs = inject(MatDialog);
  private readonly announce = inject(Announce);
  private readonly opening = new OrderId();
  private readonly closing = new OrderId();
  private stormId = newId();

  protected readonly form = new FormGroup({
    name: new FormControl('', {
      nonNullable: true,
      validators: filled('A storm needs a name, such as "October gale".'),
    }),
  });
  protected readonly storms = signal<readonly StormDto[] | null>(null);
  protected readonly trouble = signal<string | null>(null);
  protected readonly isBusy = signal(false);
  protected readonly open = computed(() => this.storms()?.find(({ state }) => state === 'open'));

  constructor() {
    effect(() => {
      // A storm opened or closed at another desk.
      this.session.storm();
      untracked(() => void this.fetch());
    });
  }

  protected async openStorm(): Promise<void> {
    this.form.markAllAsTouched();
    if (this.form.invalid || this.isBusy()) return;
    const asked = { stormId: this.stormId, name: this.form.controls.name.value.trim() };
    await this.attempt(async () => {
      const storm = await this.api.call('openStorm', {
        body: { commandId: this.opening.idFor(asked), ...asked },
      });
      this.opening.done();
      this.stormId = newId();
      this.form.reset();
      this.session.takeStorm(storm);
      this.announce.notice(`${storm.name} is open.`);
    });
  }

  protected async closeStorm(storm: StormDto): Promise<void> {
    const isSure = await this.ask({
      title: `Close ${storm.name}?`,
      words:
        `${this.openWords(storm)} A closed storm takes no calls and changes no more, and it ` +
        `cannot be opened again. Its drain and its trail stay to be read.`,
      action: 'Close the storm',
    });
    if (!isSure) return;
    const asked = { version: storm.version };
    await this.attempt(async () => {
      await this.api.call('closeStorm', {
        params: { stormId: storm.id },
        body: { commandId: this.closing.idFor({ id: storm.id, ...asked }), ...asked },
      });
      this.closing.done();
      await this.session.refresh();
      this.announce.notice(`${storm.name} is closed.`);
    });
  }

  private openWords(storm: StormDto): string {
    if (this.board.storm()?.id !== storm.id) return '';
    const count = this.board.openCalls().length;
    return count === 1 ? '1 call is still open.' : `${count} calls are still open.`;
  }

  private async attempt(work: () => Promise<void>): Promise<void> {
    this.trouble.set(null);
    this.isBusy.set(true);
    try {
      await work();
    } catch (error) {
      if (!(error instanceof ProblemError) || !showFaults(this.form, error, OWN_WORDS)) {
        this.trouble.set(problemWords(error));
      }
    } finally {
      this.isBusy.set(false);
    }
    await this.fetch();
  }

  private async fetch(): Promise<void> {
    try {
      const { storms } = await this.api.call('listStorms');
      this.storms.set(storms);
    } catch (error) {
      if (!this.trouble()) this.trouble.set(problemWords(error));
    }
  }

  private async ask(data: Confirmation): Promise<boolean> {
    const dialog = this.dialogs.open<ConfirmDialog, Confirmation, true>(ConfirmDialog, {
      data,
      maxWidth: '52ch',
    });
    return (await firstValueFrom(dialog.afterClosed(), { defaultValue: undefined })) === true;
  }
}

const OWN_WORDS = { name: 'A name of at most 80 characters is needed.' };
