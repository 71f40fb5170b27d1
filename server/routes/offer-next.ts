import { offersDue } from '@shared/domain/route-rules';
import type { Job } from '../commands/run-command';
import {
  callOf,
  routeOf,
  stepCall,
  technicianOf,
  type ActiveStop,
  type Routes,
} from './lock-routes';

/**
 * The one place where stops are offered: the first stop of a route is on offer until its
 * technician accepts it, and no other stop is. Whatever changes a route ends here, so the next offer
 * follows by itself when a stop is finished, declined, pulled or passed by another.
 */
export async function offerNext(job: Job, routes: Routes, technicianId: string): Promise<void> {
  const route = routeOf(routes, technicianId);
  const { offer, withdraw } = offersDue(route);
  for (const index of withdraw) {
    const stop = route[index];
    if (stop) await withdrawOffer(job, routes, stop, 'another stop comes first');
  }
  const next = offer === null ? undefined : route[offer];
  if (!next) return;
  next.state = 'offered';
  const { name } = technicianOf(routes, technicianId);
  await stepCall(job, routes, callOf(routes, next), 'offered', `offered to ${name}`);
}

/** Takes an offer back; the stop stays on a route. */
export async function withdrawOffer(
  job: Job,
  routes: Routes,
  stop: ActiveStop,
  why: string,
): Promise<void> {
  stop.state = 'planned';
  const call = callOf(routes, stop);
  await stepCall(job, routes, call, 'waiting', `offer taken back: ${why}`);
  await stepCall(job, routes, call, 'planned', 'still on a route');
}
