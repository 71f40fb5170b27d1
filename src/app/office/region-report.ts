import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import type { KeptRegion } from '@shared/contract/regions';
import { count, counted, miles, megabytes, seconds } from './region-words';

/** Reasons shown before the rest is only counted. */
const ROWS_SHOWN = 12;

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1);
/** A sentence of the importer, as a part of one. */
const clause = (text: string): string =>
  (text.charAt(0).toLowerCase() + text.slice(1)).replace(/\.$/, '');

/** What an import made, and what it left out and why. */
@Component({
  selector: 'thaw-region-report',
  template: `
    <dl>
      @for (fact of facts(); track fact.name) {
        <div>
          <dt>{{ fact.name }}</dt>
          <dd>{{ fact.value }}</dd>
        </div>
      }
    </dl>
    @if (left().length > 0) {
      <h4>Left out</h4>
      <ul>
        @for (one of left(); track one) {
          <li>{{ one }}</li>
        }
      </ul>
    }
    @if (rejected().length > 0) {
      <div class="scroll">
        <table>
          <caption>
            Rows of the address file that were not taken{{
              more()
            }}
          </caption>
          <thead>
            <tr>
              <th scope="col" class="number">Line</th>
              <th scope="col">Why</th>
            </tr>
          </thead>
          <tbody>
            @for (row of rejected(); track row.line) {
              <tr>
                <td class="number">{{ row.line }}</td>
                <td>{{ row.reason }}</td>
              </tr>
            }
          </tbody>
        </table>
      </div>
    }
  `,
  styleUrls: ['./parts.scss', './region-part.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RegionReport {
  readonly region = input.required<KeptRegion>();

  private readonly report = computed(() => this.region().report);
  private readonly file = computed(() => this.report()?.addressFile ?? null);

  protected readonly facts = computed(() => {
    const { counts, timeZone, attribution } = this.region();
    const report = this.report();
    const file = this.file();
    return [
      { name: 'Addresses', value: count(counts.addresses) },
      { name: 'Streets', value: count(counts.streets) },
      { name: 'Places with a name', value: count(counts.places) },
      { name: 'Roads', value: miles(counts.roadKm) },
      { name: 'Map', value: `${counted(counts.tiles, 'tile')}, ${megabytes(counts.bytes)}` },
      ...(file
        ? [
            {
              name: 'Address file',
              value: `${counted(file.rows, 'row')}: ${count(file.added)} new, ${count(file.merged)} known or flats, ${count(file.rejectedCount)} not taken`,
            },
            ...(file.citiesFilled > 0
              ? [{ name: 'Towns filled in', value: count(file.citiesFilled) }]
              : []),
          ]
        : []),
      ...(report
        ? [
            {
              name: 'Import',
              value: `${seconds(report.seconds)}, ${count(report.peakMegabytes)} MB of memory at most`,
            },
          ]
        : []),
      { name: 'Time zone', value: timeZone },
      { name: 'Shown on the map', value: attribution },
    ];
  });

  protected readonly left = computed(() => [
    ...(this.report()?.leftOut ?? []).map(
      ({ what, count: many, why }) => `${capital(what)}: ${count(many)}, since ${clause(why)}.`,
    ),
    ...Object.entries(this.file()?.reasons ?? {}).map(
      ([reason, many]) => `${counted(many, 'row')} of the address file, since ${reason}.`,
    ),
  ]);

  protected readonly rejected = computed(() => (this.file()?.rejected ?? []).slice(0, ROWS_SHOWN));
  protected readonly more = computed(() => {
    const all = this.file()?.rejectedCount ?? 0;
    return all > ROWS_SHOWN ? `: the first ${String(ROWS_SHOWN)} of ${count(all)}` : '';
  });
}
