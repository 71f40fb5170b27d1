import { ChangeDetectionStrategy, Component, computed, inject, output } from '@angular/core';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { StormRoadActs } from './storm-road-acts';
import { kindWords, spanWords, type StormRoadTense, tenseOf } from './storm-road-words';

/** What waits for somebody comes first. */
const ORDER: Readonly<Record<StormRoadTense, number>> = { reported: 0, now: 1, later: 2, over: 3 };

/** The storm roads as a list, for whoever would rather read than look, or cannot look. */
@Component({
  selector: 'thaw-storm-road-list',
  templateUrl: './storm-road-list.html',
  styleUrl: './map-panel.scss',
  styles: ':host { display: block; overflow: visible; flex: none; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StormRoadList {
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  protected readonly acts = inject(StormRoadActs);

  readonly drawn = output();
  readonly shown = output<StormRoadDto>();
  readonly changed = output<StormRoadDto>();

  protected readonly rows = computed(() => {
    const now = this.clock.now();
    return [...this.board.stormRoads().values()]
      .map((road) => ({
        road,
        tense: tenseOf(road, now),
        kind: kindWords(road),
        span: spanWords(road, now, this.zone.name()),
      }))
      .sort((a, b) => ORDER[a.tense] - ORDER[b.tense] || a.road.name.localeCompare(b.road.name));
  });
}
