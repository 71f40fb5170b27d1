import type { Context } from '../context';
import { poll } from '../texts/poll';
import { followRoads } from './follow-roads';
import { measureDrives } from './measure-drives';

/** Spans begin and end by themselves, and other processes change roads: our estimate of "within seconds". */
const FOLLOW_MS = 1000;
/** Calls that are cut off are looked at again so many times less often: asking for each van costs. */
const LOOK_AGAIN_EVERY = 30;
/** Nobody waits for a drive to be measured. */
const MEASURE_MS = 30_000;

/** Keeps travel times, routes and what is learned from drives up to the roads, until it is stopped. */
export function watchRoads(context: Context): { stop(): Promise<void> } {
  let looks = 0;
  const polls = [
    poll(
      () => followRoads(context, looks++ % LOOK_AGAIN_EVERY === 0),
      FOLLOW_MS,
      (error) => context.log.warn({ err: error }, 'the routes could not follow the roads'),
    ),
    poll(
      () => measureDrives(context),
      MEASURE_MS,
      (error) => context.log.warn({ err: error }, 'drives could not be measured'),
    ),
  ];
  return {
    stop: async () => {
      await Promise.all(polls.map((one) => one.stop()));
    },
  };
}
