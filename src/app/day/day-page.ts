import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  ElementRef,
  inject,
  linkedSignal,
  signal,
  untracked,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { StopCard } from '@shared/contract/routes';
import { addMinutes } from '@shared/domain/instant';
import { whenWords } from '../board/time-words';
import { Announce } from '../core/announce';
import { Clock } from '../core/clock';
import { DayStore } from '../core/day-store';
import { Live } from '../core/live';
import { Zone } from '../core/zone';
import { addressWords } from '../intake/address-words';
import { STOP_STATE_WORDS } from '../routes/stop-words';
import { DayModel } from './day-model';
import { type DeclineAnswer, DeclineForm } from './decline-form';
import { type FinishAnswer, FinishForm } from './finish-form';
import { NextStop } from './next-stop';
import { PositionReports } from './position-reports';
import { RingDesk } from './ring-desk';
import { RoadReport } from './road-report';

/** What fills the page: the stop, or a form about it. */
type Mode = 'stop' | 'decline' | 'finish' | 'report' | 'sharing';

/** Long enough to be felt in a pocket, in milliseconds on and off. */
const NEW_OFFER_BUZZ = [200, 120, 200];

/** The technician's phone: the next stop and why, one thing to do about it, and what comes later. */
@Component({
  selector: 'thaw-day-page',
  imports: [DeclineForm, FinishForm, MatIcon, NextStop, RingDesk, RoadReport],
  templateUrl: './day-page.html',
  styleUrl: './day-page.scss',
  providers: [DayModel, PositionReports],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DayPage {
  protected readonly model = inject(DayModel);
  protected readonly day = inject(DayStore);
  protected readonly clock = inject(Clock);
  protected readonly positions = inject(PositionReports);
  private readonly live = inject(Live);
  private readonly zone = inject(Zone);
  private readonly announce = inject(Announce);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;

  protected readonly stateWords = STOP_STATE_WORDS;
  protected readonly addressWords = addressWords;

  /** Back to the stop whenever it is another one, or its state has changed. */
  protected readonly mode = linkedSignal<string, Mode>({
    // Computed, so that news of the same stop in the same state do not close a form half filled in.
    source: computed(() => {
      const stop = this.day.next()?.stop;
      return stop ? `${stop.id} ${stop.state}` : '';
    }),
    computation: () => 'stop',
  });

  /** What was just ended; a notice at the foot would lie over the button. */
  protected readonly done = signal('');

  protected readonly later = computed(() => {
    const next = this.day.next();
    return this.day.ahead().filter((card) => card !== next);
  });
  protected readonly isCurrent = computed(() => this.day.link() === 'live');
  protected readonly linkWords = computed(() => {
    if (this.isCurrent() || !this.day.isLoaded()) return '';
    const at = this.live.lastContactAt();
    const asOf = at === null ? '' : ` What you see is as of ${this.zone.clockTime(at)}.`;
    return `No connection: go on, what you do is kept and sent later.${asOf}`;
  });
  protected readonly emptyWords = computed(() => {
    if (this.day.stormId() === null) return 'No storm is open. Rest while you can.';
    return this.later().length > 0
      ? 'The next stop is not on offer yet. It appears here by itself.'
      : 'Nothing for you yet. The next stop appears here by itself.';
  });

  constructor() {
    this.tellNewOffers();
    effect(() => {
      const next = this.day.next();
      const isDriving = next?.stop.state === 'travelling';
      untracked(() => this.positions.follow(isDriving ? { to: next.address.lonLat } : null));
    });
  }

  protected async accept(card: StopCard): Promise<void> {
    this.done.set('');
    if (await this.model.accept(card)) this.announce.say('Accepted. It stays yours.');
  }

  /** The first drive asks whether the desk may see where the van is; the drive works without. */
  protected async start(card: StopCard): Promise<void> {
    if (this.positions.sharing() === 'unasked') {
      this.mode.set('sharing');
      return;
    }
    const from = await this.positions.here();
    if (await this.model.startTravel(card, from)) {
      this.announce.say('On the way. The customer is told when to expect you.');
    }
  }

  protected async startSharing(card: StopCard, answer: 'yes' | 'no'): Promise<void> {
    this.positions.choose(answer);
    this.mode.set('stop');
    await this.start(card);
  }

  protected async delay(card: StopCard, minutes: number): Promise<void> {
    const { etaAt, arriveAt } = card.stop;
    // From an arrival that has already passed, the delay counts from now.
    const later = addMinutes(Math.max(etaAt ?? arriveAt, this.clock.exact()), minutes);
    if (await this.model.tellEta(card, Math.round(later))) {
      this.announce.say(`Arrival is now ${this.when(later)}. A large change is texted.`);
    }
  }

  protected async arrive(card: StopCard): Promise<void> {
    if (await this.model.arrive(card)) {
      this.announce.say('Arrived. Unplug the unit and wait five minutes before you open it.');
    }
  }

  protected async decline(card: StopCard, answer: DeclineAnswer): Promise<void> {
    if (await this.model.decline(card, answer)) {
      this.done.set(`Call ${card.callNumber} is given back.`);
    } else this.backToTop();
  }

  protected async finish(card: StopCard, answer: FinishAnswer): Promise<void> {
    if (await this.model.finish(card, answer)) {
      this.done.set(`Call ${card.callNumber} is finished.`);
    } else this.backToTop();
  }

  /** Where this phone is, for a report; the answer to sharing while driving stays as it is. */
  protected readonly here = () => this.positions.once();

  protected roadReported(): void {
    this.mode.set('stop');
    this.done.set('The road is reported. The desk looks at it.');
  }

  protected async sendAgain(): Promise<void> {
    if (await this.model.sendAgain()) this.announce.say('Sent.');
  }

  protected when(at: number): string {
    return whenWords(at, this.clock.now(), this.zone.name());
  }

  /** Where the reason stands why nothing happened. */
  private backToTop(): void {
    this.mode.set('stop');
    this.host.querySelector('.content')?.scrollTo({ top: 0 });
  }

  private tellNewOffers(): void {
    let known: string | null = null;
    let isFirst = true;
    effect(() => {
      if (!this.day.isLoaded()) return;
      const next = this.day.next();
      const offer = next?.stop.state === 'offered' ? next : null;
      const isNew = offer !== null && offer.stop.id !== known;
      if (isNew && !isFirst) {
        navigator.vibrate?.(NEW_OFFER_BUZZ);
        untracked(() =>
          this.announce.say(`New offer: ${offer.address.text}. ${offer.stop.because}`),
        );
      }
      if (offer) known = offer.stop.id;
      isFirst = false;
    });
  }
}
