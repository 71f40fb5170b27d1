import { ChangeDetectionStrategy, Component } from '@angular/core';

// Replaced by the screen itself.
@Component({
  selector: 'thaw-day-page',
  template: '<h1>Today</h1>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DayPage {}
