/** The states of a call's life, in the order in which a call usually meets them. */
export const CALL_STATES = [
  'new',
  'checking',
  'waiting',
  'planned',
  'offered',
  'accepted',
  'travelling',
  'on-site',
  'parts-on-order',
  'running-again',
  'restored',
  'not-repairable',
  'no-access',
  'referred',
  'cancelled',
  'duplicate',
] as const;
export type CallState = (typeof CALL_STATES)[number];

/** Settled without a visit. */
export const PHONE_OUTCOMES = ['running-again', 'referred', 'cancelled', 'duplicate'] as const;
export type PhoneOutcome = (typeof PHONE_OUTCOMES)[number];

/** What a visit can end in. */
export const VISIT_OUTCOMES = [
  'restored',
  'parts-on-order',
  'not-repairable',
  'no-access',
  'referred',
] as const;
export type VisitOutcome = (typeof VISIT_OUTCOMES)[number];

/**
 * Which state may follow which. A call goes back to `waiting` when its stop is pulled, declined
 * or passed over by a later plan, and when ordered parts have come.
 */
const FOLLOWS: Readonly<Record<CallState, readonly CallState[]>> = {
  new: ['checking', 'waiting', ...PHONE_OUTCOMES],
  checking: ['new', 'waiting', ...PHONE_OUTCOMES],
  waiting: ['checking', 'planned', ...PHONE_OUTCOMES],
  planned: ['waiting', 'offered', ...PHONE_OUTCOMES],
  offered: ['waiting', 'accepted', ...PHONE_OUTCOMES],
  accepted: ['waiting', 'travelling', ...PHONE_OUTCOMES],
  travelling: ['waiting', 'accepted', 'on-site', ...PHONE_OUTCOMES],
  'on-site': [...VISIT_OUTCOMES],
  'parts-on-order': ['waiting', 'cancelled'],
  'no-access': ['waiting', 'cancelled'],
  'running-again': [],
  restored: [],
  'not-repairable': [],
  referred: [],
  cancelled: [],
  duplicate: [],
};

export const mayFollow = (from: CallState, to: CallState): boolean => FOLLOWS[from].includes(to);

const SETTLED: ReadonlySet<CallState> = new Set(
  CALL_STATES.filter((state) => FOLLOWS[state].length === 0),
);

/** Whether nothing more will happen to the call. */
export const isSettled = (state: CallState): boolean => SETTLED.has(state);

/** Whether the call still counts in the backlog. `no-access` stays open: somebody must ring again. */
export const isOpen = (state: CallState): boolean => !isSettled(state);

/** Whether a technician holds the call by their own word; the planner may not move it. */
export const isFirm = (state: CallState): boolean =>
  state === 'accepted' || state === 'travelling' || state === 'on-site';

/** Whether the planner may give the call to a technician. */
export const isPlannable = (state: CallState): boolean =>
  state === 'waiting' || state === 'planned' || state === 'offered';

/** How each state is said on a screen. */
export const STATE_WORDS: Readonly<Record<CallState, string>> = {
  new: 'New',
  checking: 'On the phone',
  waiting: 'Waiting for a visit',
  planned: 'On a route',
  offered: 'Offered',
  accepted: 'Accepted',
  travelling: 'On the way',
  'on-site': 'On site',
  'parts-on-order': 'Parts on order',
  'running-again': 'Running again',
  restored: 'Cooling restored',
  'not-repairable': 'Not repairable',
  'no-access': 'No access',
  referred: 'Referred',
  cancelled: 'Cancelled',
  duplicate: 'Duplicate',
};
