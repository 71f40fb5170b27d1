import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { Session } from '../core/session';
import { phoneWords } from './day-words';

/** The desk's number to tap; nothing where the company has not written one down. */
@Component({
  selector: 'thaw-ring-desk',
  imports: [MatIcon],
  template: `
    @if (phone(); as number) {
      <a [href]="'tel:' + number">
        <mat-icon svgIcon="call" aria-hidden="true" />
        Ring the desk <span class="number">{{ words(number) }}</span>
      </a>
    }
  `,
  styles: `
    a {
      display: inline-flex;
      flex-wrap: wrap;
      align-items: center;
      gap: 0 8px;
      min-block-size: 48px;
      padding: 4px 14px;
      border: 1.5px solid var(--thaw-accent);
      border-radius: var(--thaw-radius);
      background: var(--thaw-raised);
      font-weight: 500;
      text-decoration: none;
    }
    .number {
      white-space: nowrap;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RingDesk {
  private readonly session = inject(Session);
  protected readonly phone = computed(() => this.session.settings()?.companyPhone || null);
  protected readonly words = phoneWords;
}
