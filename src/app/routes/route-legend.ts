import { ChangeDetectionStrategy, Component } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { LEGEND_STATES } from './stop-words';

/** What the shapes of the routes mean, in the place of the chosen stop while there is none. */
@Component({
  selector: 'thaw-route-legend',
  imports: [MatIcon],
  template: `
    <ul aria-label="What the shapes mean">
      @for (one of states; track one.state) {
        <li><mat-icon [svgIcon]="one.icon" aria-hidden="true" /> {{ one.word }}</li>
      }
      <li><mat-icon svgIcon="lock" aria-hidden="true" /> Locked</li>
      <li><span class="road"></span> Drive</li>
      <li><span class="break"></span> Break</li>
      <li><mat-icon svgIcon="storefront" aria-hidden="true" /> Store</li>
      <li><span class="strip cold"></span> Cold</li>
      <li><span class="strip risk"></span> At risk</li>
      <li><span class="strip lost"></span> Past its save-by</li>
      <li>2 h 05: to spare at the end of the visit</li>
      <li class="hint">Arrow keys choose a stop; <kbd>?</kbd> lists all keys.</li>
    </ul>
  `,
  styleUrl: './route-legend.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RouteLegend {
  protected readonly states = LEGEND_STATES;
}
