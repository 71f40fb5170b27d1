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
import { ChartCanvas } from './chart-canvas';
import { totalsOf } from './drain-curves';
import { BUCKETS, type BucketMinutes, DrainFeed } from './drain-feed';
import { DrainFigures } from './drain-figures';
import { assumptionWords, backlogWords, forecastWords, valueWords } from './drain-words';
import { drawBacklog, drawValue, type DrainView } from './draw-drain';
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
    LossAhead,
    MatButton,
    MatButtonToggleModule,
    MatIcon,
    RouterLink,
    ShareTable,
    TimeTable,
  ],
  providers: [DrainFeed],
  templateUrl: './drain-page.html',
  styleUrl: './drain-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DrainPage {
  private readonly zone = inject(Zone);
  protected readonly feed = inject(DrainFeed);
  protected readonly board = inject(BoardStore);
  protected readonly clock = inject(Clock);

  protected readonly buckets = BUCKETS;
  protected readonly isTableShown = signal(false);

  private readonly isNarrow = toSignal(
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
        isOver: !this.feed.isOpen(),
      }
    );
  });
  /** What is drawn and told, once there is a call. */
  protected readonly shown = computed(() => {
    const view = this.view();
    if (!view || totalsOf(view.drain).arrivals === 0) return null;
    const { drain, isOver } = view;
    const clock = (at: number): string => this.zone.dayTime(at);
    return {
      drain,
      isOver,
      drawBacklog: drawBacklog(view),
      drawValue: drawValue(view),
      backlog: backlogWords(drain, clock, isOver),
      value: valueWords(drain),
      forecast: forecastWords(drain, clock),
      assumption: assumptionWords(drain),
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
