import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { addHours, type Instant } from '@shared/domain/instant';
import { Zone } from '../core/zone';
import { RULER_LABELS, shareOfHours } from './cold-strip-scale';
import { whenWords } from './time-words';

/** The labels of the common ruler: hours from now above, the clock below. */
@Component({
  selector: 'thaw-cold-ruler',
  template: `
    @for (label of labels(); track label.hours) {
      <span class="label" [class]="label.place" [style.left.%]="label.share * 100">
        <span class="hours">{{ label.text }}</span>
        @if (label.clock) {
          <span class="clock">{{ label.clock }}</span>
        }
      </span>
    }
  `,
  styleUrl: './cold-ruler.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ColdRuler {
  private readonly zone = inject(Zone);

  readonly now = input.required<Instant>();

  protected readonly labels = computed(() =>
    RULER_LABELS.map(({ hours, text }) => ({
      hours,
      text,
      place: placeOf(hours),
      share: shareOfHours(hours),
      // Between the other labels there is no room for a clock time.
      clock: CLOCK_AT.has(hours)
        ? whenWords(addHours(this.now(), hours), this.now(), this.zone.name())
        : '',
    })),
  );
}

const CLOCK_AT: ReadonlySet<number> = new Set([0, 4, 12, 24, 48]);
const LAST_HOURS = 48;

/** Labels that give way where there is little room have a name of their own. */
function placeOf(hours: number): string {
  if (hours === 0) return 'now';
  if (hours === LAST_HOURS) return 'last';
  if (hours === -4) return 'past';
  if (hours === 2) return 'near';
  return hours === 4 || hours === 24 ? 'crowded' : '';
}
