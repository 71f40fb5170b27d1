import type { IncomingMessage, Server as HttpServer } from 'node:http';
import type { RequestHandler } from 'express';
import type { Logger } from 'pino';
import type { Sequelize } from 'sequelize';
import { Server, type Socket } from 'socket.io';
import { z } from 'zod';
import { Id } from '@shared/contract/common';
import type {
  BoardChange,
  ClientEvents,
  DayChange,
  FeedAnswer,
  Numbered,
  ServerEvents,
} from '@shared/contract/realtime';
import { BOARD, dayStream } from '../commands/feed';
import type { SignedIn } from '../staff/signed-in';
import { stillSignedIn } from '../staff/still-signed-in';
import { FeedPump } from './feed-pump';
import { missedSince } from './feed-reader';
import type { Live } from './live';
import { VoidSockets } from './void-sockets';

interface SocketData {
  person: SignedIn;
}
type Io = Server<ClientEvents, ServerEvents, Record<string, never>, SocketData>;
type LiveSocket = Socket<ClientEvents, ServerEvents, Record<string, never>, SocketData>;

const DESK_ROOM = 'desk';
const OWNERS_ROOM = 'owners';
const technicianRoom = (id: string): string => `technician:${id}`;
const userRoom = (id: string): string => `user:${id}`;
const sessionRoom = (id: string): string => `session:${id}`;

const MOST_SOCKETS_PER_USER = 8;
/** Asking again and again is a client gone wrong. */
const MOST_ASKS_PER_MINUTE = 60;
const MOST_EVENTS_PER_MINUTE = 300;

const ResumeFrom = z.strictObject({ stormId: Id, after: z.int().nonnegative() });

export interface SocketDoor {
  readonly http: HttpServer;
  readonly sequelize: Sequelize;
  readonly log: Logger;
  /** The same sign-in as for HTTP: session, then the person behind it. */
  readonly middlewares: readonly RequestHandler[];
  /** Whoever the request was signed in as; asked again for each event. */
  readonly personOf: (request: IncomingMessage) => Promise<SignedIn | null>;
  readonly isOwnOrigin: (origin: string | undefined) => boolean;
  /** Told of every change to a board as it goes out. */
  readonly onBoardChange: (stormId: string, change: BoardChange) => void;
}

/**
 * Opens the socket door: announcements out, requests for what was missed in. Rooms are joined by
 * the server from the session, never by a name that a client sends.
 */
export async function serveSockets(door: SocketDoor): Promise<Live> {
  const io: Io = new Server(door.http, {
    transports: ['websocket'],
    // CORS does not hold back a cross-origin WebSocket; this does.
    allowRequest: (request, answer) => answer(null, door.isOwnOrigin(request.headers.origin)),
    maxHttpBufferSize: 16_384,
    serveClient: false,
  });
  for (const middleware of door.middlewares) io.engine.use(middleware);

  io.use((socket, next) => {
    door.personOf(socket.request).then(
      (person) => {
        if (!person) return next(new Error('not-signed-in'));
        // Nothing is shown by HTTP before that either.
        if (person.mustChangePassword) return next(new Error('password-change-needed'));
        socket.data.person = person;
        next();
      },
      () => next(new Error('busy')),
    );
  });

  io.on('connection', (socket) => {
    const { person } = socket.data;
    const others = io.sockets.adapter.rooms.get(userRoom(person.userId))?.size ?? 0;
    if (others >= MOST_SOCKETS_PER_USER) {
      socket.emit('session:ended', 'Too many windows are open for this account.');
      socket.disconnect(true);
      return;
    }
    void socket.join([userRoom(person.userId), sessionRoom(person.sessionId)]);
    if (person.role === 'technician') {
      if (person.technicianId) void socket.join(technicianRoom(person.technicianId));
    } else void socket.join(person.role === 'owner' ? [DESK_ROOM, OWNERS_ROOM] : DESK_ROOM);

    // Also of events that mean nothing here: reading them costs, too.
    const events = new Allowance(MOST_EVENTS_PER_MINUTE);
    socket.onAny(() => {
      if (events.take()) return;
      door.log.warn({ userId: person.userId }, 'a socket sent too much and was closed');
      socket.disconnect(true);
    });

    const asks = new Allowance(MOST_ASKS_PER_MINUTE);
    socket.on('board:resume', (from, answer) =>
      resume<BoardChange>(door, socket, asks, from, answer, (now) =>
        now.role === 'technician' ? null : BOARD,
      ),
    );
    socket.on('day:resume', (from, answer) =>
      resume<DayChange>(door, socket, asks, from, answer, (now) =>
        now.technicianId ? dayStream(now.technicianId) : null,
      ),
    );
  });

  const pump = new FeedPump(door.sequelize, door.log, (stormId, stream, n, change) => {
    if (stream === BOARD) {
      io.to(DESK_ROOM).emit('board:changed', { stormId, n, change } as Numbered<BoardChange>);
      door.onBoardChange(stormId, change as BoardChange);
    } else io.to(stream).emit('day:changed', { stormId, n, change } as Numbered<DayChange>);
  });
  await pump.start();
  const voidSockets = new VoidSockets(
    () => io.sockets.sockets.values(),
    (people) => stillSignedIn(door.sequelize, people),
    door.log,
  );

  return {
    ring: (stormId) => pump.ring(stormId),
    technicianMoved: (id, position) => {
      io.to(DESK_ROOM).volatile.emit('technician:moved', id, position);
    },
    pocketsChanged: (stormId, pockets) => {
      io.to(DESK_ROOM).emit('pockets:changed', stormId, pockets);
    },
    nightLogProgressed: (log) => {
      io.to(DESK_ROOM).emit('night-log:progressed', log);
    },
    regionChanged: (region) => {
      io.emit('region:changed', region);
    },
    regionImportProgressed: (progress) => {
      io.to(OWNERS_ROOM).emit('region:import-progressed', progress);
    },
    regionSwitchProgressed: (progress) => {
      io.to(OWNERS_ROOM).emit('region:switch-progressed', progress);
    },
    endSockets: (whose, why) => {
      const room = 'userId' in whose ? userRoom(whose.userId) : sessionRoom(whose.sessionId);
      io.to(room).emit('session:ended', why);
      io.in(room).disconnectSockets(true);
    },
    close: async () => {
      voidSockets.stop();
      await pump.stop();
      await io.close();
    },
  };
}

/**
 * Answers one request for missed changes. Nothing that a client sends may end the process: a
 * throw in a socket handler would, so everything is checked and caught here.
 */
function resume<C extends BoardChange | DayChange>(
  door: SocketDoor,
  socket: LiveSocket,
  asks: Allowance,
  from: unknown,
  answer: unknown,
  streamFor: (person: SignedIn) => string | null,
): void {
  if (typeof answer !== 'function') return;
  const reply = answer as (missed: FeedAnswer<C>) => void;
  const sent = ResumeFrom.safeParse(from);
  if (!sent.success || !asks.take()) return reply({ kind: 'start-over' });

  door
    .personOf(socket.request)
    .then(async (person) => {
      const stream = person && streamFor(person);
      if (!stream) {
        socket.emit('session:ended', 'Sign in again.');
        socket.disconnect(true);
        return;
      }
      const { stormId, after } = sent.data;
      reply(await missedSince<C>(door.sequelize, stormId, stream, after));
    })
    .catch((error: unknown) => {
      door.log.warn({ err: error }, 'could not read missed changes');
      reply({ kind: 'start-over' });
    });
}

/** Lets so many through a minute. */
class Allowance {
  private used = 0;
  private since = Date.now();

  constructor(private readonly perMinute: number) {}

  take(): boolean {
    const now = Date.now();
    if (now - this.since > 60_000) {
      this.since = now;
      this.used = 0;
    }
    this.used += 1;
    return this.used <= this.perMinute;
  }
}
