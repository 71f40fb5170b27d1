import { ChangeDetectionStrategy, Component, input, output } from '@angular/core';
import { MatIcon } from '@angular/material/icon';

/** What was asked for did not happen: why, what is different meanwhile, and whether it can be tried again. */
@Component({
  selector: 'thaw-setback-box',
  imports: [MatIcon],
  template: `
    <div class="caution" role="alert">
      <mat-icon svgIcon="warning" aria-hidden="true" />
      <div>
        <p>{{ words() }}</p>
        @if (changes().length > 0) {
          <ul>
            @for (change of changes(); track change) {
              <li>{{ change }}</li>
            }
          </ul>
        }
        <p class="acts">
          @if (mayRetry()) {
            <button type="button" (click)="retried.emit()">Try again</button>
          }
          <button type="button" class="quiet" (click)="dismissed.emit()">Put away</button>
        </p>
      </div>
    </div>
  `,
  styles: `
    ul {
      margin: 4px 0 0;
      padding-inline-start: 20px;
    }
    .acts {
      display: flex;
      flex-wrap: wrap;
      gap: 8px;
      margin-block-start: 6px;
    }
    button {
      min-block-size: max(var(--thaw-target), 32px);
      padding: 3px 10px;
      border: 1px solid var(--thaw-rule-strong);
      border-radius: var(--thaw-radius);
      background: var(--thaw-raised);
      color: var(--thaw-accent);
      font-weight: 500;
      cursor: pointer;
    }
    .quiet {
      border-color: transparent;
      background: none;
    }
    .quiet:first-child {
      margin-inline-start: -10px;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SetbackBox {
  readonly words = input.required<string>();
  /** What is different since, as the server has it now. */
  readonly changes = input<readonly string[]>([]);
  readonly mayRetry = input.required<boolean>();
  readonly retried = output();
  readonly dismissed = output();
}
