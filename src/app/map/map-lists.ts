import { ChangeDetectionStrategy, Component, computed, inject, output } from '@angular/core';
import type { AreaDto, PocketDto } from '@shared/contract/areas';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { InHoursPipe, MoneyPipe, Zone } from '../core/zone';
import { whenWords } from '../board/time-words';
import { areaTimesWords } from './area-words';
import { StormRoadList } from './storm-road-list';

/** Areas and pockets as lists, for whoever would rather read than look, or cannot look. */
@Component({
  selector: 'thaw-map-lists',
  imports: [InHoursPipe, MoneyPipe, StormRoadList],
  templateUrl: './map-lists.html',
  styleUrl: './map-panel.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MapLists {
  protected readonly board = inject(BoardStore);
  protected readonly clock = inject(Clock);
  private readonly zone = inject(Zone);

  readonly drawn = output();
  readonly picked = output();
  readonly imported = output();
  readonly changed = output<AreaDto>();
  readonly shown = output<AreaDto | PocketDto>();
  readonly chosen = output<PocketDto>();
  readonly roadClosed = output();
  readonly roadShown = output<StormRoadDto>();
  readonly roadChanged = output<StormRoadDto>();
  readonly closed = output();

  protected readonly areas = computed(() => {
    const counts = new Map<string, number>();
    for (const { areaId } of this.board.openCalls()) {
      if (areaId !== null) counts.set(areaId, (counts.get(areaId) ?? 0) + 1);
    }
    return [...this.board.areas().values()]
      .sort((a, b) => a.name.localeCompare(b.name))
      .map((area) => ({
        area,
        calls: counts.get(area.id) ?? 0,
        times: areaTimesWords(area, this.clock.now(), this.zone.name()),
      }));
  });

  protected when(at: number): string {
    return whenWords(at, this.clock.now(), this.zone.name());
  }
}
