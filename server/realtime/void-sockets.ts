import type { Logger } from 'pino';
import type { SignedIn } from '../staff/signed-in';

/** How long a socket may outlive its session, in milliseconds. */
const LOOK_MS = 2000;

interface OpenSocket {
  readonly data: { readonly person: SignedIn };
  disconnect(close: true): unknown;
}

/**
 * Closes sockets whose session has run out, or was ended by another server of the same database:
 * what a person may see is no more a matter of one process than what they may do. The client then asks
 * who it is and comes back if it may.
 */
export class VoidSockets {
  private readonly timer: NodeJS.Timeout;
  private isLooking = false;

  constructor(
    private readonly open: () => Iterable<OpenSocket>,
    private readonly stillSignedIn: (people: readonly SignedIn[]) => Promise<ReadonlySet<string>>,
    private readonly log: Logger,
  ) {
    this.timer = setInterval(() => void this.look(), LOOK_MS);
    this.timer.unref();
  }

  stop(): void {
    clearInterval(this.timer);
  }

  private async look(): Promise<void> {
    const sockets = [...this.open()];
    if (this.isLooking || sockets.length === 0) return;
    this.isLooking = true;
    try {
      const alive = await this.stillSignedIn(sockets.map(({ data }) => data.person));
      for (const socket of sockets)
        if (!alive.has(socket.data.person.sessionId)) socket.disconnect(true);
    } catch (error) {
      // The database is away, and with it all changes that could be told; the next look tries again.
      this.log.warn({ err: error }, 'could not check who is still signed in');
    } finally {
      this.isLooking = false;
    }
  }
}
