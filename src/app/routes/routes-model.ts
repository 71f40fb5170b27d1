import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { CallRow } from '@shared/contract/calls';
import type { PlanDto, StopDto } from '@shared/contract/routes';
import { STATE_WORDS } from '@shared/domain/call-state';
import { HOUR_MS } from '@shared/domain/instant';
import { Announce } from '../core/announce';
import { Api, newId } from '../core/api';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Live } from '../core/live';
import { ProblemError } from '../core/problem-error';
import { fromStorage, toStorage } from '../core/storage';
import { money, Zone } from '../core/zone';
import { isStop, stopChanges } from './stop-words';

/** What stood in the way of the last change, what is different since, and how to go on. */
export interface Setback {
  readonly words: string;
  readonly changes: readonly string[];
  readonly retry: (() => Promise<boolean>) | null;
  readonly proposeAgain: boolean;
}

/** A search for routes that the server is at. */
export interface RunningSearch {
  readonly startedAt: number;
  readonly seconds: number;
}

/** What became of a proposal that was on screen and no longer is. */
export interface PlanFate {
  readonly words: string;
  readonly proposeAgain: boolean;
}

interface Attempt {
  readonly send: () => Promise<void>;
  /** The stop as the person who acts saw it, to say what is different now. */
  readonly before?: StopDto;
  /** The proposal that this decides about. */
  readonly planId?: string;
}

/** The automatic plan that this browser's desk has read and closed. */
const READ_AS = 'thawline:automatic-read';
/** Older routes are no news, whoever published them: our estimate. */
const TOLD_MS = 2 * HOUR_MS;

/** Proposals and changes of stops, and what to say when one of them is refused. */
@Injectable()
export class RoutesModel {
  private readonly api = inject(Api);
  private readonly board = inject(BoardStore);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);

  private readonly pending = signal(0);
  private readonly stopped = signal<Setback | null>(null);
  private readonly searching = signal<RunningSearch | null>(null);
  private readonly fateNow = signal<PlanFate | null>(null);
  private readonly readPlan = signal(fromStorage(READ_AS));
  private readonly newestPlan = signal<PlanDto | null>(null);
  private readonly endedPlans = new Map<string, PlanDto['state']>();
  /** Proposals that this desk published or discarded: their end is no news here. */
  private readonly ownPlans = new Set<string>();
  /** The proposal that the refusal on screen is about. */
  private refusedPlan: string | null = null;

  readonly isBusy = computed(() => this.pending() > 0);
  readonly setback = this.stopped.asReadonly();
  readonly search = this.searching.asReadonly();
  readonly fate = this.fateNow.asReadonly();
  /** What the automatic mode has done and nobody here has closed; empty when nothing. */
  readonly done = computed(() => {
    const last = this.board.automaticDone();
    if (!last || last.planId === this.readPlan()) return '';
    if (this.clock.now() - last.at > TOLD_MS) return '';
    const moved = `${last.moved} ${last.moved === 1 ? 'stop' : 'stops'} moved`;
    return `${this.zone.clockTime(last.at)}: the automatic mode published routes, since ${last.because}. They gain ${money(last.gainCents)}; ${moved}.`;
  });
  /** Why calls are on no route, as the newest proposal found out. */
  readonly unplanned = computed(
    () => new Map((this.newestPlan()?.unplanned ?? []).map((one) => [one.callId, one])),
  );

  constructor() {
    const stop = inject(Live).on('board:changed', ({ change }) => {
      if (change.kind !== 'plan' || change.plan.state === 'proposed') return;
      this.endedPlans.set(change.plan.id, change.plan.state);
      if (change.plan.state === 'published' && change.plan.automatic) this.fateNow.set(null);
    });
    inject(DestroyRef).onDestroy(stop);
    let shown: string | null = null;
    effect(() => {
      const plan = this.board.plan();
      untracked(() => {
        if (plan) {
          this.newestPlan.set(plan);
          if (plan.id !== shown) this.fateNow.set(null);
        } else if (shown !== null && this.board.isLoaded()) this.tellFate(shown);
      });
      shown = plan?.id ?? null;
    });
  }

  dismissSetback(): void {
    this.stopped.set(null);
  }

  dismissDone(): void {
    const planId = this.board.automaticDone()?.planId ?? '';
    this.readPlan.set(planId);
    toStorage(READ_AS, planId);
  }

  dismissFate(): void {
    this.fateNow.set(null);
  }

  /** Searches for so many seconds; the proposal then stands beside the routes in force. */
  async propose(seconds: number): Promise<boolean> {
    const stormId = this.board.storm()?.id;
    if (stormId === undefined || this.searching()) return false;
    const body = { commandId: newId(), planId: newId(), seconds };
    return this.run({
      send: async () => {
        this.searching.set({ startedAt: this.clock.exact(), seconds });
        this.fateNow.set(null);
        try {
          const plan = await this.api.call('proposePlan', { params: { stormId }, body });
          this.board.takeReply({ kind: 'plan', plan });
          this.newestPlan.set(plan);
          this.announce.say(
            `Proposal ready: ${plan.figures.stops} stops, ${plan.unplanned.length} calls on no route.`,
          );
        } finally {
          this.searching.set(null);
        }
      },
    });
  }

  publish(plan: PlanDto): Promise<boolean> {
    return this.endPlan('publishPlan', plan, 'Routes published. The next stops are on offer.');
  }

  discard(plan: PlanDto): Promise<boolean> {
    return this.endPlan('discardPlan', plan, 'Proposal discarded. The routes stay as they were.');
  }

  lock(stop: StopDto, locked: boolean): Promise<boolean> {
    const body = { ...stamp(stop), locked };
    return this.change(stop, () =>
      this.api.call('lockStop', { params: { stopId: stop.id }, body }),
    );
  }

  /** @param position place on that route, from 0, without the stop itself */
  move(stop: StopDto, technicianId: string, position: number): Promise<boolean> {
    const body = { ...stamp(stop), technicianId, position };
    return this.change(stop, () =>
      this.api.call('moveStop', { params: { stopId: stop.id }, body }),
    );
  }

  pull(stop: StopDto, reason: string): Promise<boolean> {
    const body = { ...stamp(stop), reason };
    return this.change(stop, () =>
      this.api.call('pullStop', { params: { stopId: stop.id }, body }),
    );
  }

  /** Puts a waiting call on a route; resolves with the new stop's id, or `null` when refused. */
  async add(call: CallRow, technicianId: string, position: number): Promise<string | null> {
    const stopId = newId();
    const body = { ...stamp(call), stopId, technicianId, position };
    const isDone = await this.change(null, () =>
      this.api.call('addStop', { params: { callId: call.id }, body }),
    );
    return isDone ? stopId : null;
  }

  private change(
    before: StopDto | null,
    send: () => Promise<{ readonly stop: StopDto }>,
  ): Promise<boolean> {
    return this.run({
      ...(before ? { before } : {}),
      send: async () => {
        const { stop } = await send();
        this.board.takeReply({ kind: 'stops', stops: [stop] });
      },
    });
  }

  private endPlan(
    how: 'publishPlan' | 'discardPlan',
    plan: PlanDto,
    words: string,
  ): Promise<boolean> {
    const body = stamp(plan);
    return this.run({
      planId: plan.id,
      send: async () => {
        this.ownPlans.add(plan.id);
        try {
          const ended = await this.api.call(how, { params: { planId: plan.id }, body });
          this.board.takeReply({ kind: 'plan', plan: ended });
          this.announce.notice(words);
        } catch (error) {
          this.ownPlans.delete(plan.id);
          throw error;
        }
      },
    });
  }

  /** A retry after a lost answer sends the very same command. */
  private async run(attempt: Attempt): Promise<boolean> {
    this.pending.update((count) => count + 1);
    this.stopped.set(null);
    this.refusedPlan = null;
    try {
      await attempt.send();
      return true;
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      this.tellSetback(error, attempt);
      return false;
    } finally {
      this.pending.update((count) => count - 1);
    }
  }

  private tellSetback(error: ProblemError, attempt: Attempt): void {
    const mayRetry = error.code === 'no-connection' || error.code === 'busy';
    const isOvertaken = error.code === 'plan-overtaken';
    this.stopped.set({
      words: error.message,
      changes: this.changesIn(error.current, attempt.before),
      retry: mayRetry ? () => this.run(attempt) : null,
      proposeAgain: isOvertaken,
    });
    if (!isOvertaken) return;
    this.refusedPlan = attempt.planId ?? null;
    // Its end may have been announced before the refusal came.
    const ended = this.endedPlans.get(attempt.planId ?? '');
    if (ended) this.mergeFate(FATES[ended]);
    this.board.reload();
  }

  private changesIn(current: unknown, before: StopDto | undefined): string[] {
    if (isStop(current)) {
      this.board.takeReply({ kind: 'stops', stops: [current] });
      if (!before) return [];
      return stopChanges(before, current, this.board.technicians(), (at) =>
        this.zone.clockTime(at),
      );
    }
    if (isCallRow(current)) {
      this.board.takeReply({ kind: 'calls', calls: [current] });
      return [`Call ${current.number} is now: ${STATE_WORDS[current.state]}`];
    }
    return [];
  }

  private tellFate(planId: string): void {
    if (this.ownPlans.has(planId) || this.searching()) return;
    const fate = FATES[this.endedPlans.get(planId) ?? 'proposed'];
    if (planId === this.refusedPlan) this.mergeFate(fate);
    else this.fateNow.set(fate);
  }

  /** A refusal that is on screen takes the words up: two boxes would tell one thing. */
  private mergeFate(fate: PlanFate): void {
    this.fateNow.set(null);
    this.stopped.update((refusal) => refusal && { ...refusal, ...fate });
  }
}

const FATES: Readonly<Record<PlanDto['state'], PlanFate>> = {
  overtaken: {
    words:
      'The routes have changed since this proposal was made, so it can no longer be published.',
    proposeAgain: true,
  },
  published: { words: 'Another desk has published this proposal.', proposeAgain: false },
  discarded: { words: 'Another desk has discarded this proposal.', proposeAgain: true },
  // Its end was announced while this desk was away.
  proposed: {
    words: 'This proposal is no longer open: somebody decided about it, or the routes changed.',
    proposeAgain: true,
  },
};

const stamp = ({ version }: { readonly version: number }) => ({ commandId: newId(), version });

const isCallRow = (value: unknown): value is CallRow =>
  typeof value === 'object' &&
  value !== null &&
  'number' in value &&
  'units' in value &&
  'version' in value;
