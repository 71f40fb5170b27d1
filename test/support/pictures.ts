import { createHash } from 'node:crypto';
import type { Socket } from 'socket.io-client';
import type { BoardPicture } from '@shared/contract/board';
import type { BoardChange, ClientEvents, Numbered, ServerEvents } from '@shared/contract/realtime';
import { afterChanges, pictureOf, type Picture } from '../../src/app/core/board-picture';
import type { TestPerson } from './server';

export async function boardOf(
  person: Pick<TestPerson, 'call'>,
  stormId: string,
): Promise<BoardPicture> {
  const reply = await person.call('boardPicture', { params: { stormId } });
  if (reply.status !== 200) throw new Error(reply.text);
  return reply.body as BoardPicture;
}

/** One word for all that a board shows, whatever the order in which it learnt of it. */
export function hashOf(picture: Picture): string {
  const rows = (map: ReadonlyMap<string, object>) =>
    [...map].sort(([a], [b]) => (a < b ? -1 : 1)).map(([, row]) => row);
  return createHash('sha256')
    .update(
      JSON.stringify(
        {
          storm: picture.storm,
          calls: rows(picture.calls),
          technicians: rows(picture.technicians),
          stops: rows(picture.stops),
          areas: rows(picture.areas),
          plan: picture.plan,
        },
        sorted,
      ),
    )
    .digest('hex');
}

const sorted = (_key: string, value: unknown): unknown =>
  value !== null && typeof value === 'object' && !Array.isArray(value)
    ? Object.fromEntries(Object.entries(value).sort(([a], [b]) => (a < b ? -1 : 1)))
    : value;

/** A board as the client keeps it: the picture, and after it each change in its order. */
export class Board {
  private picture: Picture;
  private n: number;

  constructor(sent: BoardPicture) {
    this.picture = pictureOf(sent);
    this.n = sent.n;
  }

  get last(): number {
    return this.n;
  }

  /** @throws when a number is left out */
  take(change: Numbered<BoardChange>): void {
    if (change.n <= this.n) return;
    if (change.n !== this.n + 1)
      throw new Error(`change ${String(change.n)} came after ${String(this.n)}`);
    this.picture = afterChanges(this.picture, [change.change]);
    this.n = change.n;
  }

  listen(socket: Socket<ServerEvents, ClientEvents>): this {
    socket.on('board:changed', (change) => this.take(change));
    return this;
  }

  hash(): string {
    return hashOf(this.picture);
  }
}
