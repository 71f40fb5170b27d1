import {
  beginning,
  driveBetween,
  mayTake,
  type Assignment,
  type CrewMember,
  type Decision,
  type DispatchState,
  type Policy,
} from './dispatch-state';
import type { StormCall } from './storm';

/** How early somebody sets off for an agreed window, at most. */
const EARLY_SECONDS = 15 * 60;

/** Ways to dispatch by a single rule, as they are done by hand: what the planner is compared with. */
export const SIMPLE_POLICIES = {
  /** The call that came first, to whoever of the free is nearest. */
  'first-come': () => callByCall((one, other) => one.calledAt - other.calledAt),
  /** Of all free people and open calls the two that are nearest to each other. */
  nearest: () => pairByPair((member, call, state) => -driveTo(member, call, state)),
  /** Medicine, then food, then the rest; within each what is lost first. To whoever is nearest. */
  urgency: () => callByCall((one, other, now) => classOf(one, now) - classOf(other, now) || firstLoss(one, now) - firstLoss(other, now) || one.calledAt - other.calledAt), // prettier-ignore
  /** What a visit now saves, the less the more time there is, by the minute that it takes. */
  index: () => pairByPair(indexOf),
} as const satisfies Readonly<Record<string, () => Policy>>;

/** Goes through the calls in an order that does not depend on who goes. */
function callByCall(order: (one: StormCall, other: StormCall, now: number) => number): Policy {
  return {
    decide(state) {
      const free = new Set(state.crew.filter(({ isFree }) => isFree));
      const assignments: Assignment[] = [];
      for (const call of [...state.open].sort((one, other) => order(one, other, state.now))) {
        if (free.size === 0) break;
        const able = [...free].filter((member) => mayGoNow(member, call, state));
        const nearest = best(able, (member) => -driveTo(member, call, state));
        if (!nearest) continue;
        free.delete(nearest);
        assignments.push({ technician: nearest.technician.id, call: call.id });
      }
      return withWake(assignments, state);
    },
  };
}

/** Takes the pair that scores highest, again and again. */
function pairByPair(
  score: (member: CrewMember, call: StormCall, state: DispatchState) => number,
): Policy {
  return {
    decide(state) {
      const free = new Set(state.crew.filter(({ isFree }) => isFree));
      const open = new Set(state.open);
      const assignments: Assignment[] = [];
      while (free.size > 0) {
        const pairs = [...free].flatMap((member) =>
          [...open].flatMap((call) => (mayGoNow(member, call, state) ? [{ member, call }] : [])),
        );
        const pair = best(pairs, ({ member, call }) => score(member, call, state));
        if (!pair) break;
        free.delete(pair.member);
        open.delete(pair.call);
        assignments.push({ technician: pair.member.technician.id, call: pair.call.id });
      }
      return withWake(assignments, state);
    },
  };
}

function mayGoNow(member: CrewMember, call: StormCall, state: DispatchState): boolean {
  if (!mayTake(member, call, state)) return false;
  if (!call.window) return true;
  return state.now + driveTo(member, call, state) >= call.window[0] - EARLY_SECONDS;
}

/** Somebody who waits for a window to open is asked again now and then. */
function withWake(assignments: readonly Assignment[], state: DispatchState): Decision {
  const waits = state.crew.filter(({ isFree }) => isFree).length > assignments.length;
  return waits && state.open.some(({ window }) => window && window[0] > state.now)
    ? { assignments, wakeAt: state.now + EARLY_SECONDS }
    : { assignments };
}

const driveTo = (member: CrewMember, call: StormCall, { storm }: DispatchState): number =>
  driveBetween(storm, member.place, call.place);

const live = (call: StormCall, from: number): StormCall['stakes'] =>
  call.stakes.filter(({ at }) => at >= from);

function classOf(call: StormCall, now: number): number {
  const left = live(call, now);
  if (left.some(({ kind }) => kind === 'medicine')) return 0;
  return left.length > 0 ? 1 : 2;
}

const firstLoss = (call: StormCall, now: number): number =>
  Math.min(Infinity, ...live(call, now).map(({ at }) => at));

/** How far ahead a loss weighs, as a multiple of a usual visit with its drive. */
const FORESIGHT_SECONDS = 2.5 * 55 * 60;
/** What a visit is worth that saves nothing, and what an hour of waiting adds. */
const PLAIN_VALUE = 60;
const WAITING_VALUE = 2;

/**
 * After the apparent tardiness cost of Vepsalainen & Morton, "Priority Rules for Job Shops with Weighted
 * Tardiness Costs", Management Science 33(8), 1987.
 */
function indexOf(member: CrewMember, call: StormCall, state: DispatchState): number {
  const drive = driveTo(member, call, state);
  const begin = beginning(call, state.now + drive);
  const saved = live(call, begin).reduce(
    (sum, { at, value }) => sum + value * Math.exp(-(at - begin) / FORESIGHT_SECONDS),
    0,
  );
  const waited = (begin - call.calledAt) / 3600;
  return (
    (saved + PLAIN_VALUE + WAITING_VALUE * waited) / (begin - state.now + call.expectedService)
  );
}

function best<Item>(items: readonly Item[], score: (item: Item) => number): Item | null {
  let found: Item | null = null;
  let most = -Infinity;
  for (const item of items) {
    const its = score(item);
    if (its > most || found === null) [found, most] = [item, its];
  }
  return found;
}
