import { Injectable, signal } from '@angular/core';
import type { LonLat } from '@shared/contract/common';

export interface WantedPin {
  /** What the person at the map is asked to show, in words. */
  readonly prompt: string;
  /** Where the map had better look, if anything is known. */
  readonly near: LonLat | null;
}

/** One part of the screen asks for a point; the map lets a person show it. */
@Injectable({ providedIn: 'root' })
export class PinRequest {
  private readonly wantedNow = signal<WantedPin | null>(null);
  private settle: (point: LonLat | null) => void = () => undefined;

  /** What is asked for now; the map shows a cross-hair while it is not `null`. */
  readonly wanted = this.wantedNow.asReadonly();

  /** Asks for a point; `null` when the person thinks better of it or something else is asked. */
  ask(wanted: WantedPin): Promise<LonLat | null> {
    this.cancel();
    return new Promise((resolve) => {
      this.settle = resolve;
      this.wantedNow.set(wanted);
    });
  }

  answer(point: LonLat): void {
    this.end(point);
  }

  cancel(): void {
    this.end(null);
  }

  private end(point: LonLat | null): void {
    const settle = this.settle;
    this.settle = () => undefined;
    this.wantedNow.set(null);
    settle(point);
  }
}
