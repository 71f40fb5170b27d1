import { ChangeDetectionStrategy, Component } from '@angular/core';

// Replaced by the screen itself.
@Component({
  selector: 'thaw-office-page',
  template: '<h1>Office</h1>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class OfficePage {}
