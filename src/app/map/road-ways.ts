import { effect, inject, Injectable, signal } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { Api } from '../core/api';
import { BoardStore } from '../core/board-store';
import { ProblemError } from '../core/problem-error';
import { Session } from '../core/session';
import { Way } from './way';

/** As the contract allows, and short enough for an address. */
const AT_ONCE = 30;
/** Routes come in bursts: one question for all of them. */
const SETTLE_MS = 120;
const AGAIN_AFTER_MS = 20_000;
/** A van that stands still moves by less than this on its own. */
const CELL_DEGREES = 1e-4;

interface Drive {
  readonly from: LonLat;
  readonly to: LonLat;
}

/**
 * The ways of drives along the roads, fetched once each and kept. While one is on its way, and where
 * no road leads, the straight line stands for it.
 */
@Injectable({ providedIn: 'root' })
export class RoadWays {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly session = inject(Session);

  /** `null` when it is known that there is none. */
  private readonly known = new Map<string, Way | null>();
  private readonly wanted = new Map<string, Drive>();
  private readonly tick = signal(0);
  private timer: ReturnType<typeof setTimeout> | undefined;
  private isAsking = false;

  constructor() {
    // With other roads open or closed, and in another region, every way may be another.
    let before = '';
    effect(() => {
      const roads = [...this.board.stormRoads().values()];
      const region = this.session.region()?.tilesUrl ?? '';
      const now = [region, ...roads.map(({ id, version }) => `${id} ${version}`)].join();
      if (now !== before) this.forget();
      before = now;
    });
  }

  /** The way of a drive as far as it is known; reading it asks for it. */
  way(from: LonLat, to: LonLat): Way | null {
    this.tick();
    const drive = { from: cellOf(from), to: cellOf(to) };
    const key = keyOf(drive);
    const found = this.known.get(key);
    if (found === undefined) this.want(key, drive);
    return found ?? null;
  }

  private forget(): void {
    this.known.clear();
    this.wanted.clear();
    this.tick.update((tick) => tick + 1);
  }

  private want(key: string, drive: Drive): void {
    this.wanted.set(key, drive);
    this.timer ??= setTimeout(() => void this.ask(), SETTLE_MS);
  }

  private async ask(): Promise<void> {
    this.timer = undefined;
    if (this.isAsking) return;
    this.isAsking = true;
    try {
      while (this.wanted.size > 0) {
        const some = [...this.wanted].slice(0, AT_ONCE);
        const drives = some.map(([key]) => key).join(';');
        const { lines } = await this.api.call('roadLines', { query: { drives } });
        some.forEach(([key], i) => {
          // What was forgotten meanwhile is asked for again when somebody reads it.
          if (!this.wanted.delete(key)) return;
          const line = lines[i];
          this.known.set(key, line ? new Way(line) : null);
        });
        this.tick.update((tick) => tick + 1);
      }
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      // The straight lines stay; no board waits for a picture of the way.
      this.timer ??= setTimeout(() => void this.ask(), AGAIN_AFTER_MS);
    } finally {
      this.isAsking = false;
    }
  }
}

const cellOf = ([lon, lat]: LonLat): LonLat => [cell(lon), cell(lat)];
const cell = (degrees: number): number =>
  Math.round(Math.round(degrees / CELL_DEGREES) * CELL_DEGREES * 1e5) / 1e5;

const keyOf = ({ from, to }: Drive): string => [...from, ...to].join();
