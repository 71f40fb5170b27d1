import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import { MatSortModule, type Sort } from '@angular/material/sort';
import type { DrainDto } from '@shared/contract/office';
import { MoneyPipe } from '../core/zone';

type Share = DrainDto['byArea'][number];

const COLUMNS: readonly {
  readonly key: keyof Share;
  readonly name: string;
  readonly isMoney: boolean;
}[] = [
  { key: 'arrivals', name: 'Came in', isMoney: false },
  { key: 'settledByPhone', name: 'By phone', isMoney: false },
  { key: 'settledByVisit', name: 'By visit', isMoney: false },
  { key: 'open', name: 'Open', isMoney: false },
  { key: 'valueAtRiskCents', name: 'At risk', isMoney: true },
  { key: 'savedCents', name: 'Saved', isMoney: true },
  { key: 'lostCents', name: 'Lost', isMoney: true },
];

/** The drain's figures split up, sortable by each of them. What belongs to nobody stays last. */
@Component({
  selector: 'thaw-share-table',
  imports: [MatSortModule, MoneyPipe],
  template: `
    <div class="scroll" tabindex="0" role="region" [attr.aria-label]="caption()">
      <table
        matSort
        matSortDisableClear
        [matSortActive]="sort().active"
        [matSortDirection]="sort().direction"
        (matSortChange)="sort.set($event)"
      >
        <caption>
          {{
            caption()
          }}
        </caption>
        <thead>
          <tr>
            <th scope="col" mat-sort-header="name">{{ what() }}</th>
            @for (column of columns; track column.key) {
              <th
                scope="col"
                class="number"
                [mat-sort-header]="column.key"
                start="desc"
                arrowPosition="before"
              >
                {{ column.name }}
              </th>
            }
          </tr>
        </thead>
        <tbody>
          @for (row of sorted(); track row.id) {
            <tr>
              <th scope="row">{{ row.name }}</th>
              @for (column of columns; track column.key) {
                <td class="number">
                  @if (column.isMoney) {
                    {{ $any(row[column.key]) | money }}
                  } @else {
                    {{ row[column.key] }}
                  }
                </td>
              }
            </tr>
          } @empty {
            <tr>
              <td [attr.colspan]="columns.length + 1">No call yet.</td>
            </tr>
          }
        </tbody>
      </table>
    </div>
  `,
  styleUrl: './tables.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ShareTable {
  readonly rows = input.required<readonly Share[]>();
  readonly caption = input.required<string>();
  /** What a row is: "Area", "Technician". */
  readonly what = input.required<string>();

  protected readonly columns = COLUMNS;
  protected readonly sort = signal<Sort>({ active: 'open', direction: 'desc' });
  protected readonly sorted = computed(() => sortedShares(this.rows(), this.sort()));
}

export function sortedShares(rows: readonly Share[], { active, direction }: Sort): Share[] {
  const key = active as keyof Share;
  const sign = direction === 'asc' ? 1 : -1;
  return [...rows].sort((a, b) => {
    const nobody = Number(a.id === null) - Number(b.id === null);
    if (nobody !== 0) return nobody;
    const [x, y] = [a[key], b[key]];
    const order =
      typeof x === 'number' && typeof y === 'number' ? x - y : String(x).localeCompare(String(y));
    return sign * order || a.name.localeCompare(b.name);
  });
}
