import { inject, Injectable } from '@angular/core';
import type { PreloadingStrategy, Route } from '@angular/router';
import { EMPTY, type Observable } from 'rxjs';
import { Session } from './session';

/**
 * At a desk every screen is fetched ahead, so that changing screens is instant. A technician's
 * phone is on a thin line and needs one screen only.
 */
@Injectable({ providedIn: 'root' })
export class DeskPreloading implements PreloadingStrategy {
  private readonly session = inject(Session);

  preload(route: Route, load: () => Observable<unknown>): Observable<unknown> {
    return this.session.isDesk() && route.path !== 'day' ? load() : EMPTY;
  }
}
