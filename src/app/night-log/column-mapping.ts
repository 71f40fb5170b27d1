import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { ColumnGuess } from '@shared/contract/night-logs';
import { COLUMN_ROLES, type ColumnRole, ROLE_LABELS } from '@shared/domain/night-log/column-map';
import { confidenceWords, isDoubtful, missingWords } from './night-log-words';

/** Each column of the log: its title, a few of its cells, and what it holds, for a person to correct. */
@Component({
  selector: 'thaw-column-mapping',
  imports: [MatIcon],
  template: `
    <h3 id="columns-title">Columns</h3>
    @if (missing() !== '') {
      <p class="missing"><mat-icon svgIcon="warning" aria-hidden="true" /> {{ missing() }}</p>
    }
    <ol aria-labelledby="columns-title">
      @for (column of shown(); track column.index) {
        <li [class.doubtful]="column.isDoubtful">
          <div class="what">
            <label [for]="'column-' + column.index">{{ column.header }}</label>
            <p class="samples">
              @for (sample of column.samples; track $index) {
                <span>{{ sample }}</span>
              } @empty {
                <span class="nothing">no cell has anything in it</span>
              }
            </p>
          </div>
          <div class="role">
            <select
              #role
              [id]="'column-' + column.index"
              [disabled]="isFixed()"
              [attr.aria-describedby]="'column-why-' + column.index"
              (change)="changed.emit({ index: column.index, role: asRole(role.value) })"
            >
              @for (one of roles; track one.role) {
                <option [value]="one.role" [selected]="one.role === column.role">
                  {{ one.label }}
                </option>
              }
            </select>
            <p class="why" [id]="'column-why-' + column.index">
              @if (column.isDoubtful) {
                <mat-icon svgIcon="help" aria-hidden="true" />
              }
              <span>
                <strong>{{ column.confidence }}</strong>: {{ column.why }}
              </span>
            </p>
          </div>
        </li>
      }
    </ol>
  `,
  styleUrls: ['../intake/fields.scss', './column-mapping.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ColumnMapping {
  readonly columns = input.required<readonly ColumnGuess[]>();
  /** While the log is being imported its columns stay as they are. */
  readonly isFixed = input(false);
  readonly changed = output<{ readonly index: number; readonly role: ColumnRole }>();

  protected readonly roles = COLUMN_ROLES.map((role) => ({ role, label: ROLE_LABELS[role] }));
  protected readonly missing = computed(() => missingWords(this.columns().map(({ role }) => role)));
  protected readonly shown = computed(() =>
    this.columns().map((column) => ({
      ...column,
      header: column.header === '' ? `Column ${column.index + 1}` : column.header,
      confidence: confidenceWords(column.confidence),
      isDoubtful: isDoubtful(column.confidence),
    })),
  );

  protected asRole(value: string): ColumnRole {
    return COLUMN_ROLES.find((role) => role === value) ?? 'ignore';
  }
}
