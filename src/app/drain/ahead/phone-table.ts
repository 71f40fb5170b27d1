import { DecimalPipe, PercentPipe } from '@angular/common';
import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { ForecastDto } from '@shared/contract/forecast';

/** What each number of people on the phones makes of the busiest hour ahead. */
@Component({
  selector: 'thaw-phone-table',
  imports: [DecimalPipe, PercentPipe],
  template: `
    <p>
      In the busiest of the next 12 hours {{ phone().callsPerHour.middle | number: '1.0-0' }} calls
      ({{ phone().callsPerHour.low | number: '1.0-0' }} to
      {{ phone().callsPerHour.high | number: '1.0-0' }}),
      {{ phone().handleMinutes.middle | number: '1.0-0' }} minutes each.
    </p>
    <div class="scroll" tabindex="0" role="region" aria-label="People on the phones">
      <table>
        <caption>
          People on the phones, at
          {{
            phone().callsPerHour.middle | number: '1.0-0'
          }}
          calls an hour
        </caption>
        <thead>
          <tr>
            <th scope="col">People</th>
            <th scope="col" class="number">Speaking</th>
            <th scope="col" class="number">Mean wait</th>
            <th scope="col" class="number">Within 20 s</th>
            <th scope="col" class="number">Within 60 s</th>
            <th scope="col" class="number">
              Wait at {{ phone().callsPerHour.high | number: '1.0-0' }}/h
            </th>
          </tr>
        </thead>
        <tbody>
          @for (row of rows(); track row.staff) {
            <tr>
              <th scope="row">{{ row.staff }}{{ row.isNow ? ' (now)' : '' }}</th>
              <td class="number">{{ row.speaking | percent }}</td>
              <td class="number">{{ row.wait }}</td>
              <td class="number">{{ row.within20 | percent }}</td>
              <td class="number">{{ row.within60 | percent }}</td>
              <td class="number">{{ row.busyWait }}</td>
            </tr>
          }
        </tbody>
      </table>
    </div>
    <p class="soft">
      By Erlang’s formula C, which lets nobody hang up: in truth people do, ring again, and the
      waits are shorter than told where they are long. It holds for new callers at this rate, not
      for the calls that wait already.
    </p>
  `,
  styleUrl: '../tables.scss',
  styles: `
    .soft {
      max-inline-size: 90ch;
      color: var(--thaw-ink-soft);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PhoneTable {
  readonly phone = input.required<ForecastDto['phone']>();

  protected readonly rows = computed(() =>
    this.phone().staffing.map((one) => ({
      ...one,
      isNow: one.staff === this.phone().staffNow,
      speaking: Math.min(1, one.occupancy),
      wait: waitWords(one.waitSeconds),
      busyWait: waitWords(one.busyWaitSeconds),
    })),
  );
}

/** `8 s`, `6 min`, `grows`: a mean wait. */
export function waitWords(seconds: number | null): string {
  if (seconds === null) return 'grows';
  if (seconds < 100) return `${Math.round(seconds)} s`;
  return `${Math.round(seconds / 60)} min`;
}
