import { ChangeDetectionStrategy, Component } from '@angular/core';

// Replaced by the screen itself.
@Component({
  selector: 'thaw-drain-page',
  template: '<h1>Drain</h1>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DrainPage {}
