import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { DrainPoint } from './drain-curves';
import { MoneyPipe } from '../core/zone';

/** The state of the storm as two sums that add up: calls, and the value of what they keep cold. */
@Component({
  selector: 'thaw-drain-figures',
  imports: [MoneyPipe],
  template: `
    <dl aria-label="Calls">
      <div>
        <dt>came in</dt>
        <dd>{{ totals().arrivals }}</dd>
      </div>
      <div data-sign="−">
        <dt>settled by phone</dt>
        <dd>{{ totals().settledByPhone }}</dd>
      </div>
      <div data-sign="−">
        <dt>settled by visit</dt>
        <dd>{{ totals().settledByVisit }}</dd>
      </div>
      <div class="main" data-sign="=">
        <dt>open</dt>
        <dd>{{ totals().open }}</dd>
      </div>
    </dl>
    <dl aria-label="Value">
      <div>
        <dt>told of</dt>
        <dd>{{ whole() | money }}</dd>
      </div>
      <div class="main" data-sign="=">
        <dt><span class="ground risk" aria-hidden="true"></span>at risk</dt>
        <dd>{{ totals().valueAtRiskCents | money }}</dd>
      </div>
      <div data-sign="+">
        <dt><span class="ground safe" aria-hidden="true"></span>saved</dt>
        <dd>{{ totals().savedCents | money }}</dd>
      </div>
      <div data-sign="+">
        <dt><span class="ground lost" aria-hidden="true"></span>lost</dt>
        <dd>{{ totals().lostCents | money }}</dd>
      </div>
    </dl>
  `,
  styleUrl: './drain-figures.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DrainFigures {
  readonly totals = input.required<DrainPoint>();

  protected readonly whole = computed(() => {
    const { valueAtRiskCents, savedCents, lostCents } = this.totals();
    return valueAtRiskCents + savedCents + lostCents;
  });
}
