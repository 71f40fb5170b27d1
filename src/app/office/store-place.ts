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
import type { LonLat } from '@shared/contract/common';
import type { Settings } from '@shared/contract/office';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { ProblemError, problemWords } from '../core/problem-error';
import { Session } from '../core/session';
import { StartPlace } from './start-place';

/** Where the company's store is: with it, routes drive by for parts that a van lacks. */
@Component({
  selector: 'thaw-store-place',
  imports: [MatButton, StartPlace],
  template: `
    <section aria-labelledby="store-title">
      <h2 id="store-title">The store</h2>
      <p class="lead">
        With its place, a route drives by for the parts that its visits need and its van lacks, once
        a shift. Without it, a call whose parts no van carries stays on no route.
      </p>
      <thaw-start-place
        label="The store is at"
        [point]="point()"
        [error]="error()"
        (changed)="type($event)"
      />
      <div class="actions">
        <button matButton="filled" type="button" [disabled]="isBusy()" (click)="save()">
          Save the store
        </button>
        <button
          matButton
          type="button"
          [disabled]="isBusy() || stored() === null"
          (click)="remove()"
        >
          There is no store
        </button>
        <p class="trouble" role="alert">{{ trouble() }}</p>
      </div>
    </section>
  `,
  styleUrls: ['./parts.scss', './measured-speeds.scss'],
  styles: `
    thaw-start-place {
      display: block;
      max-inline-size: 560px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StorePlace {
  private readonly api = inject(Api);
  private readonly session = inject(Session);
  private readonly announce = inject(Announce);

  protected readonly stored = computed(() => this.session.settings()?.shopPlace ?? null);
  protected readonly point = signal<LonLat | null>(null);
  protected readonly error = signal<string | null>(null);
  protected readonly trouble = signal('');
  protected readonly isBusy = signal(false);

  constructor() {
    effect(() => {
      const stored = this.stored();
      untracked(() => this.point.set(stored));
    });
  }

  protected type(point: LonLat | null): void {
    this.point.set(point);
    this.error.set(null);
  }

  protected async save(): Promise<void> {
    const point = this.point();
    if (!point) return this.error.set('Choose where the store is.');
    await this.send([point[0], point[1]], 'The store is saved. New plans count with it.');
  }

  protected async remove(): Promise<void> {
    await this.send(null, 'There is no store. New plans count with what is on the vans.');
  }

  private async send(shopPlace: LonLat | null, words: string): Promise<void> {
    const settings = this.session.settings();
    if (!settings || this.isBusy()) return;
    this.isBusy.set(true);
    this.trouble.set('');
    try {
      const after = await this.api.call('changeSettings', {
        body: { commandId: newId(), version: settings.version, shopPlace },
      });
      this.session.takeSettings(after);
      this.announce.notice(words);
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (error.code === 'stale-version') this.session.takeSettings(error.current as Settings);
      this.trouble.set(problemWords(error));
    } finally {
      this.isBusy.set(false);
    }
  }
}
