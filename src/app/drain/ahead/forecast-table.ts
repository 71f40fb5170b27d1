import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { OutlookDto } from '@shared/contract/forecast';
import { DayTimePipe } from '../../core/zone';

/** Half hours are too many to read; so many rows are shown at most, evenly apart. */
const MOST_ROWS = 24;

/** The forecast's curve as a table. */
@Component({
  selector: 'thaw-forecast-table',
  imports: [DayTimePipe],
  template: `
    <div class="scroll tall" tabindex="0" role="region" [attr.aria-label]="caption()">
      <table>
        <caption>
          {{
            caption()
          }}
        </caption>
        <thead>
          <tr>
            <th scope="col">Time</th>
            <th scope="col" class="number">At least</th>
            <th scope="col" class="number">In the middle</th>
            <th scope="col" class="number">At most</th>
            @if (changed()) {
              <th scope="col" class="number">Changed: at least</th>
              <th scope="col" class="number">In the middle</th>
              <th scope="col" class="number">At most</th>
            }
          </tr>
        </thead>
        <tbody>
          @for (row of rows(); track row.at) {
            <tr>
              <th scope="row">{{ row.at | dayTime }}</th>
              @for (count of row.counts; track $index) {
                <td class="number">{{ count }}</td>
              }
            </tr>
          }
        </tbody>
      </table>
    </div>
  `,
  styleUrl: '../tables.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ForecastTable {
  readonly outlook = input.required<OutlookDto>();
  /** The same with a change of the crew, to compare. */
  readonly changed = input<OutlookDto | null>(null);
  readonly caption = input('Calls open from now on, in nine of ten futures at least and at most');

  protected readonly rows = computed(() => {
    const { curve } = this.outlook();
    const other = this.changed()?.curve;
    const length = Math.max(curve.length, other?.length ?? 0);
    const every = Math.max(1, Math.ceil(length / MOST_ROWS));
    return Array.from({ length: Math.ceil(length / every) }, (_, i) => i * every).map((i) => {
      // One of the two may be done sooner than the other.
      const point = curve[i];
      const changed = other?.[i];
      const cells = (open: { low: number; middle: number; high: number } | undefined) =>
        open ? [open.low, open.middle, open.high].map((n) => String(Math.round(n))) : ['', '', ''];
      return {
        at: point?.at ?? changed?.at ?? 0,
        counts: [...cells(point?.open), ...(other ? cells(changed?.open) : [])],
      };
    });
  });
}
