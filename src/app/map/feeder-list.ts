import {
  ChangeDetectionStrategy,
  Component,
  computed,
  type ElementRef,
  inject,
  signal,
  viewChild,
} from '@angular/core';
import type { FeederDto } from '@shared/contract/feeders';
import { FeederPick } from './feeder-pick';

/** The region's feeders to choose from by name: what a click on the map does, for the keyboard. */
@Component({
  selector: 'thaw-feeder-list',
  templateUrl: './feeder-list.html',
  styleUrls: ['./map-panel.scss', './feeder-list.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class FeederList {
  protected readonly pick = inject(FeederPick);
  protected readonly typed = signal('');
  private readonly list = viewChild.required<ElementRef<HTMLElement>>('list');

  /** Those that contain every word that was typed, in any order; chosen ones first when none was. */
  protected readonly found = computed(() => {
    const words = this.typed().toLowerCase().split(/\s+/).filter(Boolean);
    const feeders = this.pick.feeders() ?? [];
    if (words.length === 0) return feeders;
    return feeders.filter(({ name, substation }) => {
      const text = `${name} ${substation}`.toLowerCase();
      return words.every((word) => text.includes(word));
    });
  });

  protected readonly chosenWords = computed(() => {
    const chosen = this.pick.chosen();
    if (chosen.length === 0) return 'None chosen yet.';
    const customers = chosen.reduce((sum, feeder) => sum + feeder.customers, 0);
    return `${chosen.length === 1 ? '1 feeder' : `${chosen.length} feeders`}, ${addresses(customers)}`;
  });

  protected toggleFirst(): void {
    const [first] = this.found();
    if (first && this.typed().trim() !== '') this.pick.toggle(first);
  }

  protected toList(): void {
    this.list().nativeElement.querySelector('input')?.focus();
  }

  protected wordsOf({ substation, customers, wave }: FeederDto): string {
    return [
      ...(substation === '' ? [] : [substation]),
      addresses(customers),
      ...(wave === null ? [] : [`repair wave ${wave.order}`]),
    ].join(', ');
  }
}

const addresses = (count: number): string =>
  count === 1 ? '1 address' : `${count.toLocaleString('en-US')} addresses`;
