import { ChangeDetectionStrategy, Component, computed, inject, signal } from '@angular/core';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { fromEntry } from '../office/shift-entry';
import { CallModel } from './call-model';

/** Puts a call whose parts came, or that nobody answered, back in the queue, with the agreed window. */
@Component({
  selector: 'thaw-return-form',
  template: `
    <form (submit)="$event.preventDefault(); send()" novalidate>
      <p class="note">When did the customer agree to? Leave it empty when nothing was agreed.</p>
      <div class="pair">
        <label class="inline">
          Day <input #day type="date" [value]="date()" (input)="date.set(day.value)" />
        </label>
        <label class="inline">
          from <input #early type="time" [value]="from()" (input)="from.set(early.value)" />
        </label>
        <label class="inline">
          to <input #late type="time" [value]="to()" (input)="to.set(late.value)" />
        </label>
      </div>
      <p class="note error" role="alert">{{ error() }}</p>
      <button type="submit" class="plain main" [attr.aria-busy]="isSending() ? true : null">
        Back into the queue
      </button>
    </form>
  `,
  styleUrl: '../intake/fields.scss',
  styles: `
    form {
      display: grid;
      gap: 6px;
      justify-items: start;
    }
    .pair {
      display: flex;
      flex-wrap: wrap;
      gap: 6px 12px;
    }
    input {
      inline-size: auto;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ReturnForm {
  private readonly call = inject(CallModel);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);

  protected readonly date = signal('');
  protected readonly from = signal('');
  protected readonly to = signal('');
  protected readonly error = signal('');
  protected readonly isSending = signal(false);
  private readonly isEmpty = computed(() => !this.date() && !this.from() && !this.to());

  protected async send(): Promise<void> {
    if (this.isSending()) return;
    const window = this.isEmpty() ? null : this.read();
    this.error.set(typeof window === 'string' ? window : '');
    if (typeof window === 'string') return;
    this.isSending.set(true);
    try {
      const id = this.call.row()?.id;
      await this.call.whenIdle();
      if (this.call.row()?.id === id) {
        await this.call.returnToWaiting('Ready for another visit', window);
      }
    } finally {
      this.isSending.set(false);
    }
  }

  private read(): { readonly from: number; readonly to: number } | string {
    const read = fromEntry(
      { date: this.date(), from: this.from(), to: this.to() },
      this.zone.name(),
    );
    if (typeof read === 'string') return read;
    if (read.endsAt <= this.clock.exact()) return 'That window is over already.';
    return { from: read.startsAt, to: read.endsAt };
  }
}
