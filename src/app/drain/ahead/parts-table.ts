import { DecimalPipe, PercentPipe } from '@angular/common';
import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatIcon } from '@angular/material/icon';
import type { PartsAheadDto } from '@shared/contract/forecast';
import { PART_WORDS } from '@shared/domain/skills';
import { DayTimePipe } from '../../core/zone';

/** What the stops until tomorrow night need, against what is on the vans. */
@Component({
  selector: 'thaw-parts-table',
  imports: [DayTimePipe, DecimalPipe, MatButton, MatIcon, PercentPipe],
  templateUrl: './parts-table.html',
  styleUrls: ['../tables.scss', './ahead.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PartsTable {
  readonly parts = input.required<PartsAheadDto>();
  readonly csvUrl = input.required<string>();

  protected readonly words = PART_WORDS;
  /** Vans on which some part may be needed. */
  protected readonly vans = computed(() =>
    this.parts().vans.filter(({ parts }) => parts.length > 0),
  );
  protected readonly hasRoutes = computed(() => this.parts().vans.some(({ stops }) => stops > 0));
  protected readonly toLoad = computed(() => this.parts().shelf.filter(({ load }) => load > 0));
}
