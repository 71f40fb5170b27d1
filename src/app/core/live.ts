import { DOCUMENT } from '@angular/common';
import {
  computed,
  DestroyRef,
  effect,
  inject,
  Injectable,
  InjectionToken,
  signal,
} from '@angular/core';
import type { ClientEvents, ServerEvents } from '@shared/contract/realtime';
import type { Instant } from '@shared/domain/instant';
import { io, type Socket } from 'socket.io-client';
import { Clock } from './clock';
import { Session } from './session';

export type LiveSocket = Socket<ServerEvents, ClientEvents>;
export type LinkState = 'connecting' | 'live' | 'lost';

/** Tests put a socket of their own here. */
export const LIVE_SOCKET = new InjectionToken<LiveSocket>('the socket to the server', {
  providedIn: 'root',
  factory: () => io({ transports: ['websocket'], withCredentials: true, autoConnect: false }),
});

const ANSWER_WITHIN_MS = 10_000;
const REOPEN_AFTER_MS = 3_000;
/** A storm opens once in weeks, and nobody is kept from work by some seconds. */
const NEXT_STORM_MS = 10_000;

type Ask<E extends keyof ClientEvents> = Parameters<ClientEvents[E]>;

/** The line on which the server announces changes. Changes themselves go by HTTP. */
@Injectable({ providedIn: 'root' })
export class Live {
  private readonly socket = inject(LIVE_SOCKET);
  private readonly clock = inject(Clock);
  private readonly session = inject(Session);

  private readonly linkNow = signal<LinkState>('connecting');
  private readonly contactAt = signal<Instant | null>(null);
  private readonly online = signal(true);
  private reopening: ReturnType<typeof setTimeout> | undefined;

  readonly link = this.linkNow.asReadonly();
  /** When the server was last heard; it is heard every 25 seconds at least. */
  readonly lastContactAt = this.contactAt.asReadonly();
  /** `false`: this device itself says that it has no network. */
  readonly isOnline = this.online.asReadonly();
  readonly isOffline = computed(() => this.link() === 'lost' && !this.online());

  constructor() {
    const heard = (): void => this.contactAt.set(this.clock.exact());
    this.socket.on('connect', () => {
      heard();
      // It may have changed while nothing was heard.
      if (this.linkNow() === 'lost') void this.session.refreshRegion();
      this.linkNow.set('live');
    });
    this.socket.onAny(heard);
    this.socket.io.on('ping', heard);
    this.socket.on('disconnect', (reason) => {
      this.linkNow.set('lost');
      // The server closes a socket on purpose when the session has changed; ask what now holds.
      if (reason === 'io server disconnect') void this.session.refresh().then(() => this.reopen());
    });
    this.socket.on('connect_error', () => {
      this.linkNow.set('lost');
      // The browser does not say whether the server is away or has refused; the session knows.
      void this.session.refresh().then(() => this.reopen());
    });
    this.socket.on('region:changed', (region) => this.session.takeRegion(region));
    this.socket.on('session:ended', (reason) => this.session.end(reason));
    this.watchForNextStorm();
    this.watchNetwork();
    inject(DestroyRef).onDestroy(() => {
      clearTimeout(this.reopening);
      this.socket.off();
      this.socket.disconnect();
    });
  }

  open(): void {
    if (!this.socket.connected) this.linkNow.set('connecting');
    this.socket.connect();
  }

  close(): void {
    clearTimeout(this.reopening);
    this.socket.disconnect();
    this.linkNow.set('connecting');
    this.contactAt.set(null);
  }

  /** Calls `heard` at every event of that name; returns how to stop. */
  on<E extends keyof ServerEvents>(event: E, heard: ServerEvents[E]): () => void {
    // The library's listener type is a conditional one that cannot be resolved for an open `E`.
    const socket = this.socket as unknown as Emitter;
    socket.on(event, heard);
    return () => socket.off(event, heard);
  }

  /** Calls `connected` at every connection, and now if there is one; returns how to stop. */
  onConnect(connected: () => void): () => void {
    this.socket.on('connect', connected);
    if (this.socket.connected) connected();
    return () => this.socket.off('connect', connected);
  }

  /** Calls `lost` whenever the connection ends. */
  onLost(lost: () => void): () => void {
    this.socket.on('disconnect', lost);
    return () => this.socket.off('disconnect', lost);
  }

  /** Asks over the socket; rejects when no answer comes in time. */
  ask<E extends keyof ClientEvents>(event: E, from: Ask<E>[0]): Promise<Parameters<Ask<E>[1]>[0]> {
    const socket = this.socket.timeout(ANSWER_WITHIN_MS) as unknown as Asker;
    return socket.emitWithAck(event, from) as Promise<Parameters<Ask<E>[1]>[0]>;
  }

  /** A refusal ends socket.io's own attempts, unlike a failure. */
  private reopen(): void {
    if (this.socket.active || !this.session.me()) return;
    clearTimeout(this.reopening);
    this.reopening = setTimeout(() => this.socket.connect(), REOPEN_AFTER_MS);
  }

  /** Changes are announced within a storm; whoever looks at one that has ended asks for the next. */
  private watchForNextStorm(): void {
    const isWaiting = computed(
      () => this.link() === 'live' && this.session.me() !== null && !this.session.hasOpenStorm(),
    );
    effect((onCleanup) => {
      if (!isWaiting()) return;
      const asking = setInterval(() => void this.session.refreshStorm(), NEXT_STORM_MS);
      onCleanup(() => clearInterval(asking));
    });
  }

  private watchNetwork(): void {
    const view = inject(DOCUMENT).defaultView;
    if (!view) return;
    this.online.set(view.navigator.onLine);
    const changed = (): void => {
      this.online.set(view.navigator.onLine);
      // Back on the network: do not wait for the next attempt of the back-off.
      if (view.navigator.onLine && this.socket.active && !this.socket.connected) {
        this.socket.connect();
      }
    };
    view.addEventListener('online', changed);
    view.addEventListener('offline', changed);
    inject(DestroyRef).onDestroy(() => {
      view.removeEventListener('online', changed);
      view.removeEventListener('offline', changed);
    });
  }
}

interface Emitter {
  on(event: string, heard: (...args: never[]) => void): void;
  off(event: string, heard: (...args: never[]) => void): void;
}
interface Asker {
  emitWithAck(event: string, sent: unknown): Promise<unknown>;
}
