import { ChangeDetectionStrategy, Component } from '@angular/core';

// Replaced by the screen itself.
@Component({
  selector: 'thaw-night-log-page',
  template: '<h1>Night logs</h1>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class NightLogPage {}
