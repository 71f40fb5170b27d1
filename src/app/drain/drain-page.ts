import { BreakpointObserver } from '@angular/cdk/layout';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  inject,
  signal,
} from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { MatButtonToggleModule } from '@angular/material/button-toggle';
import { MatIcon } from '@angular/material/icon';
import { RouterLink } from '@angular/router';
import { PATHS } from '@shared/contract/paths';
import { map } from 'rxjs';
import { urlOf } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Keys } from '../core/keys';
import { DayTimePipe, Zone } from '../core/zone';
import { ForecastFeed } from './ahead/forecast-feed';
import { ForecastTable } from './ahead/forecast-table';
import { aheadWords, emptyWords } from './ahead/outlook-words';
import { PartsTable } from './ahead/parts-table';
import { PhoneTable } from './ahead/phone-table';
import { WhatIfPanel } from './ahead/what-if';
import { ChartCanvas } from './chart-canvas';
import { totalsOf } from './drain-curves';
import { BUCKETS, type BucketMinutes, DrainFeed } from './drain-feed';
import { DrainFigures } from './drain-figures';
import { backlogWords, valueWords } from './drain-words';
import { drawBacklog, drawValue, type DrainView } from './draw-drain';
import { MapCredit } from '../ui/map-credit';
import { LossAhead } from './loss-ahead';
import { ShareTable } from './share-table';
import { TimeTable } from './time-table';

/** What the manager watches: calls open over time, what came in, what was settled, when it is empty. */
@Component({
  selector: 'thaw-drain-page',
  imports: [
    ChartCanvas,
    DayTimePipe,
    DrainFigures,
    ForecastTable,
    LossAhead,
    MapCredit,
    MatButton,
    MatButtonToggleModule,
    MatIcon,
    PartsTable,
    PhoneTable,
    RouterLink,
    ShareTable,
    TimeTable,
    WhatIfPanel,
  ],
  providers: [DrainFeed, ForecastFeed],
  templateUrl: './drain-page.html',
  styleUrl: './drain-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DrainPage {
  private readonly zone = inject(Zone);
  protected readonly feed = inject(DrainFeed);
  protected readonly ahead = inject(ForecastFeed);
  protected readonly board = inject(BoardStore);
  protected readonly clock = inject(Clock);

  protected readonly buckets = BUCKETS;
  protected readonly isTableShown = signal(false);

  protected readonly isNarrow = toSignal(
    inject(BreakpointObserver)
      .observe('(width < 600px)')
      .pipe(map(({ matches }) => matches)),
    { initialValue: false },
  );

  protected readonly totals = computed(() => {
    const drain = this.feed.drain();
    return drain && totalsOf(drain);
  });
  private readonly view = computed<DrainView | null>(() => {
    const drain = this.feed.drain();
    return (
      drain && {
        drain,
        zone: this.zone.name(),
        isNarrow: this.isNarrow(),
        outlook: this.ahead.forecast()?.outlook ?? null,
      }
    );
  });
  /** What is drawn and told, once there is a call. */
  protected readonly shown = computed(() => {
    const view = this.view();
    if (!view || totalsOf(view.drain).arrivals === 0) return null;
    const { drain, outlook } = view;
    const clock = (at: number): string => this.zone.dayTime(at);
    return {
      drain,
      isOver: !this.feed.isOpen(),
      drawBacklog: drawBacklog(view),
      drawValue: drawValue(view),
      backlog: backlogWords(drain, clock, outlook),
      value: valueWords(drain),
      forecast: outlook && {
        empty: emptyWords(outlook, drain, clock),
        ahead: aheadWords(outlook),
      },
    };
  });

  /** Whether the board holds this very storm, and so knows the save-by of every compartment. */
  protected readonly hasStrips = computed(
    () => this.feed.isOpen() && this.board.storm()?.id === this.feed.storm()?.id,
  );
  protected readonly calls = computed(() => [...this.board.calls().values()]);

  protected readonly csvUrl = computed(() => {
    const storm = this.feed.storm();
    if (!storm) return null;
    const query = { format: 'csv', bucketMinutes: this.feed.bucketMinutes() };
    return urlOf(PATHS.drain[1], { stormId: storm.id }, query);
  });

  protected readonly partsCsvUrl = computed(() =>
    urlOf(PATHS.partsAhead[1], { stormId: this.feed.storm()?.id ?? '' }, { format: 'csv' }),
  );

  constructor() {
    const scope = 'Drain';
    inject(Keys).register(
      [
        {
          keys: 't',
          does: 'Show or hide the figures as a table',
          scope,
          run: () => this.isTableShown.update((isShown) => !isShown),
        },
        ...BUCKETS.map((minutes, index) => ({
          keys: String(index + 1),
          does: `Count every ${minutes} minutes`,
          scope,
          run: () => this.setBucket(minutes),
        })),
      ],
      inject(DestroyRef),
    );
  }

  protected setBucket(minutes: BucketMinutes): void {
    this.feed.bucketMinutes.set(minutes);
  }
}
