import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { creditParts } from '@shared/domain/map-credit';

/** Whose data a map is, with the link that OpenStreetMap asks for. */
@Component({
  selector: 'thaw-map-credit',
  template: `@for (part of parts(); track $index) {
    @if (part.url; as url) {
      <a [href]="url" target="_blank" rel="noopener">{{ part.text }}</a>
    } @else {
      {{ part.text }}
    }
  }`,
  styles: ':host a { color: inherit; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MapCredit {
  readonly attribution = input.required<string>();
  protected readonly parts = computed(() => creditParts(this.attribution()));
}
