import { ChangeDetectionStrategy, Component, input, output } from '@angular/core';

/**
 * Somebody else changed, or took away, what is being edited here. Nothing that was typed is lost; the
 * person chooses what becomes of it.
 */
@Component({
  selector: 'thaw-overtaken-box',
  template: `
    <div class="box" role="alert">
      @if (isGone()) {
        <p>Somebody else {{ goneWords() }}. Nothing of yours is lost yet.</p>
        <div class="row">
          <button type="button" (click)="keptAsNew.emit()">{{ keepWords() }}</button>
          <button type="button" (click)="letGo.emit()">Let it go</button>
        </div>
      } @else {
        <p>Somebody else changed this meanwhile:</p>
        <ul>
          @for (change of changes(); track change) {
            <li>{{ change }}</li>
          } @empty {
            <li>The same as before, saved again</li>
          }
        </ul>
        <div class="row">
          <button type="button" (click)="keptMine.emit()">Keep my changes too</button>
          <button type="button" (click)="tookTheirs.emit()">Take theirs</button>
        </div>
      }
    </div>
  `,
  styles: `
    .box {
      display: grid;
      gap: 6px;
      padding: 8px 10px;
      border-inline-start: 4px solid var(--thaw-warn-mark);
      background: var(--thaw-warn-ground);
    }
    ul {
      margin: 0;
      padding-inline-start: 16px;
    }
    .row {
      display: flex;
      flex-wrap: wrap;
      gap: 6px;
    }
    button {
      min-block-size: var(--thaw-target);
      padding: 1px 8px;
      border: 1px solid var(--thaw-accent);
      border-radius: var(--thaw-radius);
      background: var(--thaw-raised);
      color: var(--thaw-accent);
      cursor: pointer;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class OvertakenBox {
  /** Taken away, not changed. */
  readonly isGone = input.required<boolean>();
  /** After "Somebody else": what they did, when it is gone. */
  readonly goneWords = input.required<string>();
  /** What saves it once more when it is gone. */
  readonly keepWords = input.required<string>();
  /** What is different now, in words. */
  readonly changes = input.required<readonly string[]>();

  readonly keptAsNew = output();
  readonly letGo = output();
  readonly keptMine = output();
  readonly tookTheirs = output();
}
