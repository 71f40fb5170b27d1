import { computed, DestroyRef, effect, inject, Injectable, signal } from '@angular/core';
import type { DayChange, Numbered } from '@shared/contract/realtime';
import type { StopCard, TechnicianDay } from '@shared/contract/routes';
import { Api } from './api';
import { Live, type LinkState } from './live';
import { type FeedPlace, OrderedFeed } from './ordered-feed';
import { ProblemError } from './problem-error';
import { Session } from './session';

/** A stop that somebody else took off the route. */
export interface TakenStop {
  readonly card: StopCard;
  readonly reason: string;
}

/** A technician's own stops, kept current in the same way as the boards. */
@Injectable({ providedIn: 'root' })
export class DayStore {
  private readonly api = inject(Api);
  private readonly live = inject(Live);
  private readonly session = inject(Session);

  private readonly day = signal<TechnicianDay | null>(null);
  private readonly isCurrent = signal(false);
  private readonly trouble = signal<ProblemError | null>(null);
  private readonly takenNow = signal<readonly TakenStop[]>([]);
  /** Stops that this technician ends: that they go is no news here. */
  private readonly ownEnds = new Set<string>();
  private feed: OrderedFeed<DayChange> | null = null;
  private unsubscribe: (() => void)[] = [];

  readonly link = computed<LinkState>(() => {
    if (this.live.link() === 'lost') return 'lost';
    return this.isCurrent() ? 'live' : 'connecting';
  });
  readonly isLoaded = computed(() => this.day() !== null);
  readonly problem = this.trouble.asReadonly();
  /** Offered or accepted, then taken off by others, and not yet acknowledged; the latest last. */
  readonly taken = this.takenNow.asReadonly();
  readonly stormId = computed(() => this.day()?.stormId ?? null);
  readonly technician = computed(() => this.day()?.technician ?? null);

  /** All of the day's stops in their order, those that are done among them. */
  readonly cards = computed<readonly StopCard[]>(() =>
    [...(this.day()?.stops ?? [])].sort((a, b) => a.stop.position - b.stop.position),
  );
  /** Those still to be done. */
  readonly ahead = computed(() => this.cards().filter((card) => card.stop.state !== 'done'));
  /** The one to act on: where the technician is or drives to, else accepted, else offered. */
  readonly next = computed<StopCard | null>(() => {
    for (const state of ['on-site', 'travelling', 'accepted', 'offered'] as const) {
      const card = this.ahead().find((c) => c.stop.state === state);
      if (card) return card;
    }
    return null;
  });

  constructor() {
    inject(DestroyRef).onDestroy(() => this.close());
    // A phone hears of its stops alone, and by them that the storm has ended or another has begun.
    effect(() => {
      if (!this.isLoaded()) return;
      const open = this.session.hasOpenStorm() ? this.session.storm()?.id : null;
      if (this.stormId() !== open) void this.session.refreshStorm();
    });
  }

  /** The frame does this for a technician. */
  open(): void {
    if (this.feed) return;
    const feed = new OrderedFeed<DayChange>({
      load: () => this.load(),
      resume: (from) => this.live.ask('day:resume', from),
      apply: (changes) => this.apply(changes),
      current: (isCurrent) => this.isCurrent.set(isCurrent),
      otherStorm: () => feed.startOver(),
      failed: (error) => {
        if (error instanceof ProblemError) this.trouble.set(error);
      },
    });
    this.feed = feed;
    this.unsubscribe = [
      this.live.on('day:changed', (change) => feed.receive(change)),
      this.live.onConnect(() => feed.connect()),
      this.live.onLost(() => feed.disconnect()),
    ];
    this.live.open();
    feed.start();
  }

  close(): void {
    this.feed?.stop();
    this.feed = null;
    for (const stop of this.unsubscribe) stop();
    this.unsubscribe = [];
    this.live.close();
    this.day.set(null);
    this.isCurrent.set(false);
    this.trouble.set(null);
    this.takenNow.set([]);
    this.ownEnds.clear();
  }

  /** Shows the answer to one's own action at once; its announcement may come later, or has come. */
  takeReply(card: StopCard): void {
    const known = this.day()?.stops.find((c) => c.stop.id === card.stop.id);
    if (known && known.stop.version >= card.stop.version) return;
    this.day.update((day) => day && withCard(day, card));
  }

  /** This technician finishes or declines the stop; its end may be announced before the answer. */
  endsByMe(stopId: string): void {
    this.ownEnds.add(stopId);
  }

  acknowledgeTaken(): void {
    this.takenNow.set([]);
  }

  reload(): void {
    this.feed?.startOver();
  }

  private async load(): Promise<FeedPlace | null> {
    if (this.day()) await this.session.refresh();
    const day = await this.api.call('technicianDay');
    if (!this.feed) return null;
    const stays = new Set(day.stops.map((card) => card.stop.id));
    for (const card of this.ahead()) {
      if (!stays.has(card.stop.id) && !this.ownEnds.has(card.stop.id)) {
        this.tellTaken(card, 'It went while this phone had no connection.');
      }
    }
    this.day.set(day);
    this.trouble.set(null);
    return day.stormId === null ? null : { stormId: day.stormId, n: day.n };
  }

  private apply(numbered: readonly Numbered<DayChange>[]): void {
    const before = this.day();
    if (!before) return;
    let day = before;
    for (const { change } of numbered) {
      if (change.kind === 'stop') day = withCard(day, change.card);
      else if (change.kind === 'technician') day = { ...day, technician: change.technician };
      else day = this.without(day, change.stopId, change.reason);
    }
    this.day.set(day);
  }

  /** What was only planned was no promise yet. */
  private tellTaken(card: StopCard, reason: string): void {
    if (card.stop.state === 'planned') return;
    this.takenNow.update((taken) => [...taken, { card, reason }]);
  }

  private without(day: TechnicianDay, stopId: string, reason: string): TechnicianDay {
    const gone = day.stops.find((card) => card.stop.id === stopId);
    if (!gone || gone.stop.state === 'done') return day;
    if (!this.ownEnds.has(stopId)) this.tellTaken(gone, reason);
    return { ...day, stops: day.stops.filter((card) => card !== gone) };
  }
}

function withCard(day: TechnicianDay, card: StopCard): TechnicianDay {
  const { id, state, version } = card.stop;
  const known = day.stops.find((c) => c.stop.id === id);
  if (known && known.stop.version > version) return day;
  const others = day.stops.filter((c) => c.stop.id !== id);
  const isHistory = state === 'pulled' || state === 'declined';
  return { ...day, stops: isHistory ? others : [...others, card] };
}
