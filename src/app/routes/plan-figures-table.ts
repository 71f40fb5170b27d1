import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { FigureLine } from './plan-comparison';

/** A line of figures: one for each plan, then the difference that counts. */
export interface FiguresRow {
  readonly label: string;
  readonly figures: readonly string[];
  readonly difference: string;
  readonly turn: FigureLine['turn'];
}

/** Figures of plans side by side; what is better or worse says so by a sign and a word too. */
@Component({
  selector: 'thaw-plan-figures-table',
  imports: [MatIcon],
  template: `
    <table>
      <caption class="visually-hidden">
        {{
          caption()
        }}
      </caption>
      <thead>
        <tr>
          <td></td>
          @for (name of plans(); track name) {
            <th scope="col">{{ name }}</th>
          }
          <th scope="col">{{ difference() }}</th>
        </tr>
      </thead>
      <tbody>
        @for (row of rows(); track row.label) {
          <tr>
            <th scope="row">{{ row.label }}</th>
            @for (figure of row.figures; track $index) {
              <td>{{ figure }}</td>
            }
            <td class="turn" [class]="row.turn">
              @if (row.turn === 'better') {
                <mat-icon svgIcon="check" aria-hidden="true" />
                <span class="visually-hidden">better: </span>
              } @else if (row.turn === 'worse') {
                <mat-icon svgIcon="warning" aria-hidden="true" />
                <span class="visually-hidden">worse: </span>
              }
              {{ row.difference }}
            </td>
          </tr>
        }
      </tbody>
    </table>
  `,
  styleUrl: './plan-figures-table.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
  // Where it is narrow it scrolls, and arrow keys reach only what can have the focus.
  host: { tabindex: '0', role: 'group', '[attr.aria-label]': 'caption()' },
})
export class PlanFiguresTable {
  readonly caption = input.required<string>();
  /** What the columns of figures are. */
  readonly plans = input.required<readonly string[]>();
  readonly rows = input.required<readonly FiguresRow[]>();
  readonly difference = input('Difference');
}
