import { ChangeDetectionStrategy, Component } from '@angular/core';

// Replaced by the screen itself.
@Component({
  selector: 'thaw-messages-page',
  template: '<h1>Messages</h1>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MessagesPage {}
