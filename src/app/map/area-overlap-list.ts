import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { isInShape } from '@shared/domain/outage-shape';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Zone } from '../core/zone';
import { AreaEditor } from './area-editor';
import { areaTimesWords } from './area-words';

/** Which other areas cover part of the one in hand, and whose times count where both are. */
@Component({
  selector: 'thaw-area-overlaps',
  template: `
    @if (rows().length > 0) {
      <p class="note" id="overlaps">
        Other areas cover part of it. A call in several follows the one whose power comes back last:
      </p>
      <ul aria-labelledby="overlaps">
        @for (row of rows(); track row.id) {
          <li class="what">
            <strong>{{ row.name }}</strong>
            <span class="soft">{{ row.times }}</span>
            <span>{{ row.words }}</span>
          </li>
        }
      </ul>
    }
  `,
  styleUrl: './map-panel.scss',
  styles: `
    :host {
      display: block;
      overflow: visible;
      background: none;
    }

    .what {
      align-items: start;
      padding-block: 3px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AreaOverlaps {
  private readonly editor = inject(AreaEditor);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);

  protected readonly rows = computed(() => {
    const ground = this.editor.ground();
    if (!ground) return [];
    return this.editor.overlaps().map(({ area, wins }) => {
      const both = this.board
        .openCalls()
        .filter(
          ({ address: { lonLat } }) =>
            lonLat !== null && isInShape(lonLat, ground) && isInShape(lonLat, area.shape),
        ).length;
      return {
        id: area.id,
        name: area.name,
        times: areaTimesWords(area, this.clock.now(), this.zone.name()),
        words: followWords(both, wins ? area.name : 'this area'),
      };
    });
  });
}

/** "3 open calls in both follow Heron 2". */
function followWords(both: number, whom: string): string {
  if (both === 0) return `Calls in both follow ${whom}; none is open there`;
  return both === 1
    ? `1 open call in both follows ${whom}`
    : `${both} open calls in both follow ${whom}`;
}
