import { randomBytes } from 'node:crypto';

import { textLength } from '@shared/domain/texts/segments';

import type { Journal } from './fake-journal';

export type MessageDirection = 'outbound-api' | 'inbound';

export interface FakeMessage {
  readonly sid: string;
  readonly direction: MessageDirection;
  readonly to: string;
  readonly from: string;
  readonly body: string;
  readonly statusCallback: string | null;
  readonly createdAt: number;
  status: string;
  sentAt: number | null;
}

/** The texts that the journal tells of, in the order in which they came. */
export class FakeMessages {
  private readonly bySid = new Map<string, FakeMessage>();

  constructor(private readonly journal: Journal) {
    for (const entry of journal.entries()) {
      if (entry.kind === 'accepted' || entry.kind === 'inbound') this.remember(entry, entry.at);
      if (entry.kind === 'status') this.mark(entry.sid, entry.status, entry.at);
    }
  }

  get(sid: string): FakeMessage | undefined {
    return this.bySid.get(sid);
  }

  all(): readonly FakeMessage[] {
    return [...this.bySid.values()];
  }

  accept(text: {
    to: string;
    from: string;
    body: string;
    statusCallback: string | null;
    outbox: string | null;
  }): FakeMessage {
    const fact = { kind: 'accepted' as const, sid: newSid(), ...text };
    return this.remember(fact, this.journal.append(fact).at);
  }

  receive(text: { from: string; to: string; body: string }): FakeMessage {
    const fact = { kind: 'inbound' as const, sid: newSid(), ...text };
    return this.remember(fact, this.journal.append(fact).at);
  }

  moveTo(sid: string, status: string): void {
    this.mark(sid, status, this.journal.append({ kind: 'status', sid, status }).at);
  }

  private remember(
    fact: {
      kind: 'accepted' | 'inbound';
      sid: string;
      to: string;
      from: string;
      body: string;
      statusCallback?: string | null;
    },
    at: number,
  ): FakeMessage {
    const isInbound = fact.kind === 'inbound';
    const message: FakeMessage = {
      sid: fact.sid,
      direction: isInbound ? 'inbound' : 'outbound-api',
      to: fact.to,
      from: fact.from,
      body: fact.body,
      statusCallback: fact.statusCallback ?? null,
      createdAt: at,
      status: isInbound ? 'received' : 'queued',
      sentAt: isInbound ? at : null,
    };
    this.bySid.set(fact.sid, message);
    return message;
  }

  private mark(sid: string, status: string, at: number): void {
    const message = this.bySid.get(sid);
    if (!message) return;
    message.status = status;
    if (status === 'sent') message.sentAt = at;
  }
}

/** The wire form, with the field names that the SDK reads (its `MessageResource`). */
export function toResource(message: FakeMessage, accountSid: string): Record<string, unknown> {
  const uri = `/2010-04-01/Accounts/${accountSid}/Messages/${message.sid}.json`;
  const failed = message.status === 'undelivered' || message.status === 'failed';
  return {
    sid: message.sid,
    account_sid: accountSid,
    api_version: '2010-04-01',
    body: message.body,
    direction: message.direction,
    from: message.from,
    to: message.to,
    status: message.status,
    num_segments: String(textLength(message.body).segments),
    num_media: '0',
    date_created: rfc2822(message.createdAt),
    date_updated: rfc2822(message.sentAt ?? message.createdAt),
    date_sent: message.sentAt === null ? null : rfc2822(message.sentAt),
    error_code: failed ? ERROR_OF_FAILURE[message.status] : null,
    error_message: null,
    messaging_service_sid: null,
    price: null,
    price_unit: 'USD',
    uri,
    subresource_uris: {},
  };
}

/** From memory: 30003 unreachable handset, 30008 unknown error. */
export const ERROR_OF_FAILURE: Readonly<Record<string, number>> = {
  undelivered: 30003,
  failed: 30008,
};

/** Whole seconds only, as the real service tells them. */
const rfc2822 = (at: number): string => new Date(at).toUTCString().replace('GMT', '+0000');

const newSid = (): string => `SM${randomBytes(16).toString('hex')}`;
