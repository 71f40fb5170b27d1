import { ChangeDetectionStrategy, Component } from '@angular/core';

// Replaced by the screen itself.
@Component({
  selector: 'thaw-board-page',
  template: '<h1>Board</h1>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class BoardPage {}
