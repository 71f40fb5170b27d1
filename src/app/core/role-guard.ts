import { inject } from '@angular/core';
import { type CanActivateFn, Router } from '@angular/router';
import type { Role } from '@shared/contract/common';
import { isWorthReturningTo, Session } from './session';

/**
 * Lets in who is signed in with one of these roles; sends others to where they can go on. The
 * server checks rights again at every request: this only keeps people from empty screens.
 */
export function roleGuard(...roles: readonly Role[]): CanActivateFn {
  return (_, state) => {
    const session = inject(Session);
    const router = inject(Router);
    const me = session.me();
    if (!me) {
      const queryParams = isWorthReturningTo(state.url) ? { back: state.url } : {};
      return router.createUrlTree(['/sign-in'], { queryParams });
    }
    if (me.user.mustChangePassword) return router.parseUrl('/password');
    return roles.includes(me.user.role) || router.parseUrl(session.home());
  };
}

/** For the change of password: anyone who is signed in, whatever they must do first. */
export const signedInGuard: CanActivateFn = () =>
  inject(Session).me() !== null || inject(Router).parseUrl('/sign-in');

/** Sends whoever opens the bare address, or an unknown one, to the start of their work. */
export const homeGuard: CanActivateFn = () => inject(Router).parseUrl(inject(Session).home());
