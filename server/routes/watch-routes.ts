import type { Context } from '../context';
import { poll } from '../texts/poll';
import { newWatch, rollRoutes } from './roll-routes';

/** How soon an event is noticed, and how long a burst of them must be over: our estimate. */
const LOOK_MS = 1000;

/** Keeps routes planned by the newest facts, as far as the manager wants it, until it is stopped. */
export function watchRoutes(context: Context): { stop(): Promise<void> } {
  const watch = newWatch();
  return poll(
    async () => {
      const rolled = await rollRoutes(context, watch);
      if (rolled === 'proposed' || rolled === 'published')
        context.log.info({ rolled }, 'routes went on by themselves');
    },
    LOOK_MS,
    (error) => context.log.warn({ err: error }, 'the routes could not be planned by themselves'),
  );
}
