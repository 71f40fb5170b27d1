import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { DrainDto } from '@shared/contract/office';
import { DayTimePipe, MoneyPipe } from '../core/zone';

/** The pictures' figures as a table, newest first. */
@Component({
  selector: 'thaw-time-table',
  imports: [DayTimePipe, MoneyPipe],
  template: `
    <div class="scroll tall" tabindex="0" role="region" aria-label="Figures over time">
      <table>
        <caption>
          Running totals at the end of every
          {{
            drain().bucketMinutes
          }}
          minutes, newest first
        </caption>
        <thead>
          <tr>
            <th scope="col">Time</th>
            <th scope="col" class="number">Came in</th>
            <th scope="col" class="number">By phone</th>
            <th scope="col" class="number">By visit</th>
            <th scope="col" class="number">Open</th>
            <th scope="col" class="number">At risk</th>
            <th scope="col" class="number">Saved</th>
            <th scope="col" class="number">Lost</th>
          </tr>
        </thead>
        <tbody>
          @for (point of points(); track point.at) {
            <tr>
              <th scope="row">{{ point.at | dayTime }}</th>
              <td class="number">{{ point.arrivals }}</td>
              <td class="number">{{ point.settledByPhone }}</td>
              <td class="number">{{ point.settledByVisit }}</td>
              <td class="number">{{ point.open }}</td>
              <td class="number">{{ point.valueAtRiskCents | money }}</td>
              <td class="number">{{ point.savedCents | money }}</td>
              <td class="number">{{ point.lostCents | money }}</td>
            </tr>
          }
        </tbody>
      </table>
    </div>
  `,
  styleUrl: './tables.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class TimeTable {
  readonly drain = input.required<DrainDto>();
  protected readonly points = computed(() => [...this.drain().series].reverse());
}
