import { computed, inject, Injectable, signal } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { Api } from '../core/api';
import { ProblemError } from '../core/problem-error';
import { PinRequest } from '../intake/pin-request';

/** A hand that rests this long on a place wants to know what is there. */
const REST_MS = 180;

/** Shows a point to whoever asked for one, and says which address is nearest before it is taken. */
@Injectable()
export class PinTool {
  private readonly api = inject(Api);
  private readonly pins = inject(PinRequest);

  private readonly placedNow = signal<LonLat | null>(null);
  private readonly nearestNow = signal('');
  private timer: ReturnType<typeof setTimeout> | undefined;
  private asked = 0;

  readonly wanted = this.pins.wanted;
  readonly isOn = computed(() => this.wanted() !== null);
  /** A pin that was put down by a finger and waits to be confirmed. */
  readonly placed = this.placedNow.asReadonly();
  /** The address nearest to where the pointer, the cross-hair or the pin is. */
  readonly nearest = this.nearestNow.asReadonly();

  /** The pointer or the cross-hair is here now. */
  look(at: LonLat): void {
    if (!this.isOn()) return;
    clearTimeout(this.timer);
    this.timer = setTimeout(() => void this.find(at), REST_MS);
  }

  /** A finger cannot rest above a place first, so its pin waits for a word. */
  put(at: LonLat): void {
    this.placedNow.set(at);
    this.look(at);
  }

  take(at: LonLat): void {
    this.pins.answer(at);
    this.reset();
  }

  cancel(): void {
    this.pins.cancel();
    this.reset();
  }

  /** Forgets what the last request left behind. */
  reset(): void {
    clearTimeout(this.timer);
    this.asked++;
    this.placedNow.set(null);
    this.nearestNow.set('');
  }

  private async find([lon, lat]: LonLat): Promise<void> {
    const asked = ++this.asked;
    try {
      const { suggestion } = await this.api.call('nearestAddress', {
        query: { lon: lon.toFixed(6), lat: lat.toFixed(6) },
      });
      if (asked === this.asked) this.nearestNow.set(suggestion?.label ?? 'No address near here');
    } catch (error) {
      // The point counts without its address, too.
      if (!(error instanceof ProblemError)) throw error;
      if (asked === this.asked) this.nearestNow.set('');
    }
  }
}
