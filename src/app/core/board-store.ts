import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { PocketDto } from '@shared/contract/areas';
import type { BoardChange, Numbered } from '@shared/contract/realtime';
import type { Position } from '@shared/contract/routes';
import { isOpen } from '@shared/domain/call-state';
import { MINUTE_MS } from '@shared/domain/instant';
import { Announce } from './announce';
import { Api } from './api';
import { afterChanges, type Picture, pictureOf } from './board-picture';
import { Clock } from './clock';
import { Live, type LinkState } from './live';
import { type FeedPlace, OrderedFeed } from './ordered-feed';
import { ProblemError } from './problem-error';
import { matcher, NO_FILTER, type QueueFilter } from './queue-filter';
import { Ranking, type RankedCall, weighingBy } from './ranking';
import { Session } from './session';

const NONE: ReadonlyMap<string, never> = new Map<string, never>();
const MOVES_EVERY_MS = 250;

/**
 * The storm on screen, shared by queue, map, routes and texts. Every change comes as a numbered
 * announcement and is applied in order; a board that was away ends with the same picture as one
 * that was not.
 */
@Injectable({ providedIn: 'root' })
export class BoardStore {
  private readonly api = inject(Api);
  private readonly live = inject(Live);
  private readonly session = inject(Session);
  private readonly clock = inject(Clock);
  private readonly announce = inject(Announce);

  private readonly picture = signal<Picture | null>(null);
  private readonly pocketsNow = signal<readonly PocketDto[]>([]);
  private readonly isCurrent = signal(false);
  private readonly trouble = signal<ProblemError | null>(null);
  private readonly shownN = signal(0);
  private readonly loaded = signal(false);

  private feed: OrderedFeed<BoardChange> | null = null;
  private unsubscribe: (() => void)[] = [];
  private readonly moves = new Map<string, Position>();
  private movesTimer: ReturnType<typeof setTimeout> | undefined;

  /** Whether what is shown is current: `live` only once everything missed has been applied. */
  readonly link = computed<LinkState>(() => {
    if (this.live.link() === 'lost') return 'lost';
    return this.isCurrent() ? 'live' : 'connecting';
  });
  /** Whether the first answer has come; before, empty lists mean nothing. */
  readonly isLoaded = this.loaded.asReadonly();
  /** Why the picture could not be fetched, until it could. */
  readonly problem = this.trouble.asReadonly();
  /** Up to which change of the storm's stream the picture goes. */
  readonly n = this.shownN.asReadonly();

  readonly storm = computed(() => this.picture()?.storm ?? null);
  readonly calls = computed(() => this.picture()?.calls ?? NONE);
  readonly technicians = computed(() => this.picture()?.technicians ?? NONE);
  /** Stops that are still to be done, by id. */
  readonly stops = computed(() => this.picture()?.stops ?? NONE);
  readonly areas = computed(() => this.picture()?.areas ?? NONE);
  readonly stormRoads = computed(() => this.picture()?.stormRoads ?? NONE);
  /** The newest proposal that nobody has published or discarded. */
  readonly plan = computed(() => this.picture()?.plan ?? null);
  readonly automaticDone = computed(() => this.picture()?.automaticDone ?? null);
  readonly pockets = this.pocketsNow.asReadonly();
  /** Moves when texts have changed, for lists that fetch them. */
  readonly messagesTick = computed(() => this.picture()?.messagesTick ?? 0);

  /** Shared by queue and map. */
  readonly selectedCallId = signal<string | null>(null);
  readonly hoveredCallId = signal<string | null>(null);
  readonly filter = signal<QueueFilter>(NO_FILTER);

  readonly selectedCall = computed(() => this.calls().get(this.selectedCallId() ?? '') ?? null);
  readonly openCalls = computed(() => [...this.calls().values()].filter((c) => isOpen(c.state)));

  private readonly ranking = new Ranking();
  /** How urgency is weighed, as the manager has set it. */
  readonly weighing = computed(() => weighingBy(this.session.settings()));
  private readonly minute = computed(() => Math.floor(this.clock.now() / MINUTE_MS) * MINUTE_MS);

  /** The open calls in the order of the queue, worked out again each minute and at each change. */
  readonly ranked = computed<readonly RankedCall[]>(() =>
    this.ranking.rank(this.calls().values(), this.minute(), this.weighing()),
  );
  /** Those of them that the filter lets through. */
  readonly shown = computed<readonly RankedCall[]>(() => {
    const filter = this.filter();
    const pocket = this.pockets().find((one) => one.key === filter.pocketKey);
    const ids = filter.pocketKey === null ? null : new Set(pocket?.callIds);
    const matches = matcher(filter, ids);
    return this.ranked().filter(({ call }) => matches(call));
  });

  /** Each technician's route in order. */
  readonly routes = computed(() => {
    const routes = new Map([...this.technicians().keys()].map((id) => [id, [] as Stop[]]));
    for (const stop of this.stops().values()) routes.get(stop.technicianId)?.push(stop);
    for (const route of routes.values()) route.sort((a, b) => a.position - b.position);
    return routes;
  });
  readonly stopOfCall = computed(
    () => new Map([...this.stops().values()].map((stop) => [stop.callId, stop])),
  );

  constructor() {
    // A storm opened or closed at this desk changes which picture is wanted.
    effect(() => {
      const wanted = this.session.storm()?.id ?? null;
      untracked(() => {
        if (this.feed && this.loaded() && wanted !== (this.storm()?.id ?? null)) {
          this.feed.startOver();
        }
      });
    });
    inject(DestroyRef).onDestroy(() => this.close());
  }

  /** Starts to follow the session's storm. The frame does this for those who work at a desk. */
  open(): void {
    if (this.feed) return;
    const feed = new OrderedFeed<BoardChange>({
      load: () => this.load(),
      resume: (from) => this.live.ask('board:resume', from),
      apply: (changes) => this.apply(changes),
      current: (isCurrent) => this.isCurrent.set(isCurrent),
      otherStorm: () => void this.session.refresh(),
      failed: (error) => this.failed(error),
    });
    this.feed = feed;
    this.unsubscribe = [
      this.live.on('board:changed', (change) => feed.receive(change)),
      this.live.on('technician:moved', (id, position) => this.moved(id, position)),
      this.live.on('pockets:changed', (stormId, pockets) => this.takePockets(stormId, pockets)),
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
    clearTimeout(this.movesTimer);
    this.movesTimer = undefined;
    this.moves.clear();
    this.live.close();
    this.picture.set(null);
    this.pocketsNow.set([]);
    this.loaded.set(false);
    this.isCurrent.set(false);
    this.trouble.set(null);
    this.selectedCallId.set(null);
    this.hoveredCallId.set(null);
    this.filter.set(NO_FILTER);
  }

  /**
   * Shows the answer to a change of one's own at once, without waiting for its announcement. Only
   * a strictly newer row is taken: the announcement may have come first, with more behind it.
   */
  takeReply(change: BoardChange): void {
    const picture = this.picture();
    if (!picture) return;
    this.picture.set(afterChanges(picture, [onlyNewer(picture, change)]));
  }

  /** Fetches the whole picture again, as after `plan-overtaken`. */
  reload(): void {
    this.feed?.startOver();
  }

  private async load(): Promise<FeedPlace | null> {
    // After the first time something did not fit: another storm may be open by now.
    if (this.loaded()) await this.session.refresh();
    const stormId = this.session.storm()?.id;
    if (!stormId) {
      this.picture.set(null);
      this.pocketsNow.set([]);
      this.loaded.set(true);
      return null;
    }
    const sent = await this.api.call('boardPicture', { params: { stormId } });
    if (!this.feed) return null;
    this.clock.correct(sent.serverNow);
    this.picture.set(pictureOf(sent));
    this.shownN.set(sent.n);
    this.trouble.set(null);
    this.loaded.set(true);
    void this.fetchPockets(stormId);
    return { stormId, n: sent.n };
  }

  private async fetchPockets(stormId: string): Promise<void> {
    try {
      const { pockets } = await this.api.call('pockets', { params: { stormId } });
      this.takePockets(stormId, pockets);
    } catch (error) {
      // The board works without pockets, and the next announcement brings them.
      if (!(error instanceof ProblemError)) throw error;
    }
  }

  private takePockets(stormId: string, pockets: readonly PocketDto[]): void {
    if (this.storm()?.id === stormId) this.pocketsNow.set(pockets);
  }

  private apply(numbered: readonly Numbered<BoardChange>[]): void {
    const before = this.picture();
    if (!before) return;
    const changes = numbered.map((one) => one.change);
    const after = afterChanges(before, changes);
    this.picture.set(after);
    this.shownN.set(numbered.at(-1)?.n ?? this.shownN());
    if (after.storm !== before.storm) this.session.takeStorm(after.storm);
    if (after.settings && after.settings !== before.settings) {
      this.session.takeSettings(after.settings);
    }
    this.announce.tally('new call', countNew(before, after));
    this.announce.tally('text from a customer', countReplies(changes));
  }

  private moved(technicianId: string, position: Position): void {
    this.moves.set(technicianId, position);
    this.movesTimer ??= setTimeout(() => this.showMoves(), MOVES_EVERY_MS);
  }

  private showMoves(): void {
    this.movesTimer = undefined;
    const picture = this.picture();
    if (picture) {
      const technicians = new Map(picture.technicians);
      for (const [id, position] of this.moves) {
        const row = technicians.get(id);
        if (row && (row.position?.at ?? 0) <= position.at) {
          technicians.set(id, { ...row, position });
        }
      }
      this.picture.set({ ...picture, technicians });
    }
    this.moves.clear();
  }

  private failed(error: unknown): void {
    if (error instanceof ProblemError) this.trouble.set(error);
  }
}

type Stop = Picture['stops'] extends ReadonlyMap<string, infer S> ? S : never;

function onlyNewer(picture: Picture, change: BoardChange): BoardChange {
  const isNewer =
    (known: ReadonlyMap<string, { readonly version: number }>) =>
    (row: { readonly id: string; readonly version: number }): boolean =>
      (known.get(row.id)?.version ?? -1) < row.version;
  switch (change.kind) {
    case 'calls':
      return { ...change, calls: change.calls.filter(isNewer(picture.calls)) };
    case 'stops':
      return { ...change, stops: change.stops.filter(isNewer(picture.stops)) };
    case 'areas':
      return { ...change, areas: change.areas.filter(isNewer(picture.areas)) };
    case 'storm-roads':
      return { ...change, roads: change.roads.filter(isNewer(picture.stormRoads)) };
    case 'technicians':
      return { ...change, technicians: change.technicians.filter(isNewer(picture.technicians)) };
    default:
      return change;
  }
}

function countNew(before: Picture, after: Picture): number {
  return before.calls === after.calls ? 0 : after.calls.size - before.calls.size;
}

const countReplies = (changes: readonly BoardChange[]): number =>
  changes.reduce(
    (sum, change) =>
      change.kind === 'messages'
        ? sum + change.messages.filter((m) => m.direction === 'in' && m.readAt === null).length
        : sum,
    0,
  );
