import { ChangeDetectionStrategy, Component } from '@angular/core';

// Replaced by the screen itself.
@Component({
  selector: 'thaw-routes-page',
  template: '<h1>Routes</h1>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RoutesPage {}
