import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import { MatSlideToggle } from '@angular/material/slide-toggle';
import { Keys } from '../core/keys';

/** Lists the keys that work on the screen behind it. */
@Component({
  selector: 'thaw-keys-sheet',
  imports: [
    MatButton,
    MatDialogActions,
    MatDialogClose,
    MatDialogContent,
    MatDialogTitle,
    MatSlideToggle,
  ],
  template: `
    <h2 mat-dialog-title>Keys on this screen</h2>
    <!-- The arrow keys scroll it where it is taller than the window. -->
    <mat-dialog-content tabindex="0" role="region" aria-label="List of keys">
      <div class="scopes">
        @for (group of keys.byScope(); track group.scope) {
          <section>
            <h3>{{ group.scope }}</h3>
            <dl>
              @for (action of group.actions; track action) {
                <div>
                  <dt>
                    @for (step of steps(action.keys); track $index) {
                      <kbd>{{ step }}</kbd>
                    }
                  </dt>
                  <dd>{{ action.does }}</dd>
                </div>
              }
            </dl>
          </section>
        }
      </div>
    </mat-dialog-content>
    <mat-dialog-actions>
      <mat-slide-toggle [checked]="keys.isOn()" (change)="keys.turn($event.checked ? 'on' : 'off')">
        Single keys work
      </mat-slide-toggle>
      <span class="space"></span>
      <button matButton mat-dialog-close type="button" cdkFocusInitial>Close</button>
    </mat-dialog-actions>
  `,
  styleUrl: './keys-sheet.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class KeysSheet {
  protected readonly keys = inject(Keys);

  protected steps(keys: string): string[] {
    return keys.split(' ').map((step) =>
      step
        .split('+')
        .map((part) => KEY_WORDS[part] ?? part)
        .join(' '),
    );
  }
}

/** What stands on the key, or what people call it. */
const KEY_WORDS: Readonly<Record<string, string>> = {
  ArrowUp: '↑',
  ArrowDown: '↓',
  ArrowLeft: '←',
  ArrowRight: '→',
  Escape: 'Esc',
  Delete: 'Del',
};
