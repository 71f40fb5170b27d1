import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import type { SentBodyOf } from '@shared/contract/http';
import type { StopCard } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import { Api, newId } from '../core/api';
import { Clock } from '../core/clock';
import { DayStore } from '../core/day-store';
import { Drafts } from '../core/drafts';
import { Live } from '../core/live';
import { ProblemError } from '../core/problem-error';
import { type DayOrder, type DayRoute, formDraftKey, isCard, isOrder } from './day-orders';

const UNSENT = 'day-unsent';

/** Refusals that say nothing about the order itself: it is kept and sent again. */
const KEEPS = new Set<string>(['no-connection', 'busy', 'internal', 'not-signed-in']);

const FIRST_RETRY_MS = 5_000;
const LAST_RETRY_MS = 60_000;

type Without<K extends DayRoute> = Omit<SentBodyOf<K>, 'commandId' | 'version'>;

/**
 * What the technician does with a stop. An order is written down before it is sent and stays until
 * the server has answered, so that neither lost signal nor a closed browser loses it.
 */
@Injectable()
export class DayModel {
  private readonly api = inject(Api);
  private readonly day = inject(DayStore);
  private readonly live = inject(Live);
  private readonly clock = inject(Clock);
  private readonly drafts = inject(Drafts);

  private readonly kept = signal<DayOrder | null>(null);
  private readonly sending = signal(false);
  private readonly refused = signal<string | null>(null);
  private readonly keptBecause = signal<string | null>(null);

  private retryTimer: ReturnType<typeof setTimeout> | undefined;
  private retryMs = FIRST_RETRY_MS;

  /** An order that has not reached the server, as far as this phone knows. */
  readonly unsent = computed(() => (this.sending() ? null : this.kept()));
  /** Why it has not. */
  readonly unsentBecause = this.keptBecause.asReadonly();
  readonly isBusy = this.sending.asReadonly();
  /** Why the server did not take the last order; it stays until it is acknowledged. */
  readonly refusal = this.refused.asReadonly();

  constructor() {
    this.kept.set(this.drafts.load(UNSENT, isOrder));
    // Signal is back: what was kept goes out before anything else. The socket may not have noticed
    // a short break at all, so the network's own word counts too, and the time.
    let wasBack = false;
    effect(() => {
      const isBack = this.day.link() === 'live' && this.live.isOnline();
      if (isBack && !wasBack) untracked(() => void this.sendAgain());
      wasBack = isBack;
    });
    inject(DestroyRef).onDestroy(() => clearTimeout(this.retryTimer));
  }

  accept(card: StopCard): Promise<boolean> {
    return this.act('acceptStop', card, `Accepted call ${card.callNumber}`, {});
  }

  decline(card: StopCard, answer: Without<'declineStop'>): Promise<boolean> {
    return this.act('declineStop', card, `Gave back call ${card.callNumber}`, answer);
  }

  startTravel(card: StopCard, from: LonLat | null): Promise<boolean> {
    return this.act('startTravel', card, `Started for call ${card.callNumber}`, { from });
  }

  tellEta(card: StopCard, etaAt: Instant): Promise<boolean> {
    return this.act('tellEta', card, `New arrival time for call ${card.callNumber}`, { etaAt });
  }

  arrive(card: StopCard): Promise<boolean> {
    return this.act('arrive', card, `Arrived at call ${card.callNumber}`, {});
  }

  finish(card: StopCard, answer: Without<'finishStop'>): Promise<boolean> {
    return this.act('finishStop', card, `Finished call ${card.callNumber}`, answer);
  }

  async sendAgain(): Promise<boolean> {
    const order = this.kept();
    return order !== null && !this.sending() && this.send(order);
  }

  /** Throws the kept order away; it may have arrived all the same, so the day is fetched anew. */
  forget(): void {
    this.keep(null);
    this.day.reload();
  }

  acknowledgeRefusal(): void {
    this.refused.set(null);
  }

  private act<K extends DayRoute>(
    route: K,
    { stop }: StopCard,
    label: string,
    body: Without<K>,
  ): Promise<boolean> {
    // One at a time: the next one depends on what became of this one.
    if (this.sending() || this.kept()) return Promise.resolve(false);
    const order = {
      route,
      stopId: stop.id,
      body: { ...body, commandId: newId(), version: stop.version },
      label,
      at: this.clock.exact(),
    };
    return this.send(order);
  }

  private async send(order: DayOrder): Promise<boolean> {
    this.sending.set(true);
    this.refused.set(null);
    this.keep(order);
    if (order.route === 'finishStop' || order.route === 'declineStop') {
      this.day.endsByMe(order.stopId);
    }
    try {
      const { card } = await this.api.call(order.route, {
        params: { stopId: order.stopId },
        body: order.body,
      });
      this.keep(null);
      this.day.takeReply(card);
      if (order.route === 'declineStop' || order.route === 'finishStop') {
        for (const form of ['decline', 'finish', 'wait'] as const)
          this.drafts.clear(formDraftKey(form, order.stopId));
      }
      return true;
    } catch (error) {
      if (!(error instanceof ProblemError)) throw error;
      if (KEEPS.has(error.code)) {
        this.keptBecause.set(error.message);
        this.retryLater();
      } else this.tellRefusal(error, order);
      return false;
    } finally {
      this.sending.set(false);
    }
  }

  private retryLater(): void {
    this.retryTimer = setTimeout(() => void this.sendAgain(), this.retryMs);
    this.retryMs = Math.min(this.retryMs * 2, LAST_RETRY_MS);
  }

  private keep(order: DayOrder | null): void {
    clearTimeout(this.retryTimer);
    if (!order) this.retryMs = FIRST_RETRY_MS;
    this.kept.set(order);
    this.keptBecause.set(null);
    if (order) this.drafts.save(UNSENT, order);
    else this.drafts.clear(UNSENT);
  }

  private tellRefusal(error: ProblemError, order: DayOrder): void {
    this.keep(null);
    this.refused.set(`“${order.label}” was not taken. ${error.message}`);
    if (isCard(error.current)) this.day.takeReply(error.current);
    else this.day.reload();
  }
}
