import {
  afterRenderEffect,
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  input,
  linkedSignal,
  model,
  output,
  signal,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { CallRow } from '@shared/contract/calls';
import type { NightLogRowView } from '@shared/contract/night-logs';
import { STATE_WORDS } from '@shared/domain/call-state';
import { AsidesModel } from './asides-model';

/** Which question about the row is being answered. */
export type AsideForm = 'none' | 'belongs' | 'nothing';

interface Settlement {
  readonly call: CallRow | null;
  readonly note: string;
  readonly addsWords: boolean;
}

/** What a person can do about a row that was put aside. */
@Component({
  selector: 'thaw-aside-actions',
  imports: [MatIcon],
  templateUrl: './aside-actions.html',
  styleUrls: ['../intake/fields.scss', './aside-actions.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AsideActions {
  protected readonly asides = inject(AsidesModel);

  readonly row = input.required<NightLogRowView>();
  /** The call that was taken from the row, once it is on the board. */
  readonly taken = input.required<CallRow | null>();
  readonly form = model.required<AsideForm>();
  readonly take = output();
  readonly settled = output<Settlement>();
  readonly left = output();
  readonly callWanted = output<string>();

  private readonly field = viewChild<ElementRef<HTMLInputElement>>('field');

  /** The open call of the same phone. */
  protected readonly likely = computed(() => this.asides.callOfPhone(this.row()));
  protected readonly number = linkedSignal(() => String(this.likely()?.number ?? ''));
  protected readonly addsWords = signal(true);
  protected readonly note = linkedSignal({ source: () => this.row().id, computation: () => '' });

  protected readonly call = computed(() => {
    const number = Number(this.number().trim());
    return Number.isInteger(number) && number > 0 ? this.asides.callOfNumber(number) : null;
  });
  protected readonly callWords = computed(() => {
    const call = this.call();
    if (call) return `${call.name}, ${call.address.text} (${STATE_WORDS[call.state]})`;
    return this.number().trim() === '' ? '' : 'No call on the board has this number.';
  });

  constructor() {
    // Whoever opened a form goes on typing in it.
    afterRenderEffect(() => {
      if (this.form() !== 'none') this.field()?.nativeElement.focus();
    });
  }

  protected belongs(): void {
    const call = this.call();
    if (!call || this.asides.isBusy()) return;
    this.settled.emit({
      call,
      note: `Belongs to call ${call.number}`,
      addsWords: this.addsWords(),
    });
  }

  protected nothing(): void {
    if (this.asides.isBusy()) return;
    this.settled.emit({ call: null, note: this.note().trim(), addsWords: false });
  }

  /** The row's words are in the remark of the call already. */
  protected settleTaken(call: CallRow): void {
    if (this.asides.isBusy()) return;
    this.settled.emit({ call, note: `Taken as call ${call.number}`, addsWords: false });
  }
}
