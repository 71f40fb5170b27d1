import type { CallRow } from '@shared/contract/calls';
import type { MessageDto } from '@shared/contract/messages';
import type { Instant } from '@shared/domain/instant';

/** All texts with one phone, as far as they are known here. */
export interface TextThread {
  /** E.164, or a carrier's short number. */
  readonly phone: string;
  /** The household's newest call on the board, or that of its newest text. */
  readonly callId: string | null;
  readonly call: CallRow | null;
  readonly last: MessageDto | null;
  /** Texts from the customer that nobody has read. */
  readonly unread: number;
  readonly at: Instant;
}

/**
 * Groups texts by phone, newest thread first. A call with unread texts has a thread even when its
 * texts are older than those that the list brings.
 */
export function threadsOf(
  messages: Iterable<MessageDto>,
  calls: Iterable<CallRow>,
): readonly TextThread[] {
  const byPhone = new Map<string, MessageDto[]>();
  for (const message of messages) {
    const thread = byPhone.get(message.phone);
    if (thread) thread.push(message);
    else byPhone.set(message.phone, [message]);
  }
  const callOf = new Map<string, CallRow>();
  for (const call of calls) {
    if (call.phone === null) continue;
    const known = callOf.get(call.phone);
    if (!known || call.receivedAt > known.receivedAt) callOf.set(call.phone, call);
    if (call.unreadTexts > 0 && !byPhone.has(call.phone)) byPhone.set(call.phone, []);
  }
  return [...byPhone]
    .map(([phone, texts]) => threadOf(phone, texts, callOf.get(phone) ?? null))
    .sort((a, b) => b.at - a.at || a.phone.localeCompare(b.phone));
}

function threadOf(phone: string, texts: MessageDto[], call: CallRow | null): TextThread {
  texts.sort(oldestFirst);
  const last = texts.at(-1) ?? null;
  const unreadHere = texts.filter(isUnread).length;
  return {
    phone,
    callId: call?.id ?? texts.findLast((text) => text.callId !== null)?.callId ?? null,
    call,
    last,
    unread: Math.max(unreadHere, call?.unreadTexts ?? 0),
    at: last?.at ?? call?.receivedAt ?? 0,
  };
}

export const isUnread = (message: MessageDto): boolean =>
  message.direction === 'in' && message.readAt === null;

export const oldestFirst = (a: MessageDto, b: MessageDto): number =>
  a.at - b.at || a.id.localeCompare(b.id);

/** The texts by id; of two versions of one text the newer one. */
export function newestOf(...lists: readonly (readonly MessageDto[])[]): Map<string, MessageDto> {
  const byId = new Map<string, MessageDto>();
  for (const list of lists) {
    for (const message of list) {
      const known = byId.get(message.id);
      if (!known || known.version <= message.version) byId.set(message.id, message);
    }
  }
  return byId;
}
