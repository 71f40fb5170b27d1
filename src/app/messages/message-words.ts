import type { MessageDto } from '@shared/contract/messages';
import type { IconName } from '../ui/icons';

/** How a text stands, as a shape and in words: never by colour alone. */
export const TEXT_STATES: Readonly<
  Record<
    MessageDto['state'],
    { readonly icon: IconName; readonly words: string; readonly isTrouble: boolean }
  >
> = {
  unknown: { icon: 'help', words: 'sent or not: nobody knows', isTrouble: true },
  failed: { icon: 'error', words: 'failed', isTrouble: true },
  undelivered: { icon: 'cancel', words: 'not delivered', isTrouble: true },
  new: { icon: 'schedule', words: 'waiting to go out', isTrouble: false },
  sending: { icon: 'sync', words: 'being sent', isTrouble: false },
  sent: { icon: 'check', words: 'sent', isTrouble: false },
  delivered: { icon: 'check-circle', words: 'delivered', isTrouble: false },
  suppressed: { icon: 'pause', words: 'held back', isTrouble: false },
  received: { icon: 'arrow-downward', words: 'received', isTrouble: false },
};

/** Troubles first, then the way that a text goes. */
export const STATES_IN_ORDER = Object.keys(TEXT_STATES) as readonly MessageDto['state'][];

const MILESTONES: ReadonlyMap<string, string> = new Map([
  ['call-received', 'Call received'],
  ['settled-by-phone', 'Settled by phone'],
  ['on-the-way', 'On the way'],
  ['eta-moved', 'Arrival time moved'],
  ['stop-confirmed', 'Texts ended'],
  ['start-confirmed', 'Texts wanted again'],
  ['help', 'Help'],
]);

/** Which moment a text tells of; empty for what came from a customer. */
export function milestoneWords({
  direction,
  milestone,
}: Pick<MessageDto, 'direction' | 'milestone'>): string {
  if (direction === 'in') return '';
  if (milestone === null) return 'Written by a person';
  // A newer server may tell of more moments than this page knows.
  return MILESTONES.get(milestone) ?? milestone.replace(/-/g, ' ');
}

export const segmentWords = (count: number): string =>
  `${count} ${count === 1 ? 'segment' : 'segments'}`;

/** What a person may say about a text that needs one. */
export type Decision = 'send-again' | 'was-sent' | 'give-up';

/** The decisions that the text allows, in the order of their buttons. */
export function decisionsOn({
  direction,
  state,
}: Pick<MessageDto, 'direction' | 'state'>): readonly {
  readonly decision: Decision;
  readonly words: string;
}[] {
  if (direction === 'in') return [{ decision: 'give-up', words: 'Looked after' }];
  const sendAgain = { decision: 'send-again', words: 'Send again' } as const;
  const giveUp = { decision: 'give-up', words: 'Give up' } as const;
  return state === 'unknown'
    ? [sendAgain, { decision: 'was-sent', words: 'It was sent' }, giveUp]
    : [sendAgain, giveUp];
}

/** Why a person is asked, in a sentence. */
export function whyWords({
  direction,
  state,
  trouble,
}: Pick<MessageDto, 'direction' | 'state' | 'trouble'>): string {
  if (direction === 'in') return 'A reply that belongs to no open call.';
  if (state === 'unknown') {
    const reason = trouble === null ? '' : ` (${withoutStop(trouble)})`;
    return `The text service gave no clear answer${reason}. It may have reached the customer: ring them, or decide.`;
  }
  const words = state === 'undelivered' ? 'Not delivered' : 'Failed';
  return trouble === null ? `${words}, without a reason given.` : `${words}: ${trouble}`;
}

const withoutStop = (text: string): string => text.replace(/\.$/, '');
