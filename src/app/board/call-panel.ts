import { NgTemplateOutlet } from '@angular/common';
import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  type ElementRef,
  inject,
  Injector,
  input,
  output,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { isOpen, STATE_WORDS } from '@shared/domain/call-state';
import { addMinutes, type Instant } from '@shared/domain/instant';
import { sourcesOf } from '@shared/domain/thaw/sources';
import { CAUTIONS } from '@shared/domain/phone-check/cautions';
import { formatPhone } from '@shared/domain/phone-number';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Keys } from '../core/keys';
import { Session } from '../core/session';
import { DayTimePipe, Zone } from '../core/zone';
import { placeWords } from '../intake/address-words';
import { manyAreasWords } from '../map/area-overlaps';
import { SetbackBox } from '../ui/setback-box';
import { AmendForm } from './amend-form';
import { CallModel } from './call-model';
import { CallThread } from './call-thread';
import { ColdStrip } from './cold-strip';
import { UNIT_WORDS } from './compartment-words';
import { ConcludeForm } from './conclude-form';
import { PhoneCheckPanel } from './phone-check-panel';
import { LANE_WORDS, lossWords } from './queue-words';
import { fromNowWords, whenWords } from './time-words';
import { ReturnForm } from './return-form';

/** The open call: who and where, its strip with the reasons, the phone check, texts and history. */
@Component({
  selector: 'thaw-call-panel',
  imports: [
    AmendForm,
    CallThread,
    ColdStrip,
    ConcludeForm,
    DayTimePipe,
    MatIcon,
    NgTemplateOutlet,
    PhoneCheckPanel,
    ReturnForm,
    SetbackBox,
  ],
  templateUrl: './call-panel.html',
  styleUrls: ['../intake/fields.scss', './call-panel.scss'],
  providers: [CallModel],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class CallPanel {
  protected readonly call = inject(CallModel);
  protected readonly clock = inject(Clock);
  private readonly board = inject(BoardStore);
  private readonly zone = inject(Zone);
  private readonly session = inject(Session);

  readonly callId = input.required<string>();
  readonly closed = output();

  protected readonly isAmending = signal(false);
  private readonly wantsCheck = signal(false);
  protected readonly remark = signal('');
  protected readonly stateWords = STATE_WORDS;
  protected readonly placeWords = computed(() => {
    const row = this.call.row();
    return row ? placeWords(row.address, this.session.region()) : '';
  });
  protected readonly keepShut = CAUTIONS['keep-shut'].words;
  protected readonly neverTaste = CAUTIONS['never-taste'].words;

  private readonly panel = viewChild.required<ElementRef<HTMLElement>>('panel');
  private readonly check = viewChild(PhoneCheckPanel);
  private readonly conclusion = viewChild(ConcludeForm);
  protected readonly checkResult = computed(() => this.check()?.result() ?? null);

  protected readonly phone = computed(() => {
    const phone = this.call.row()?.phone ?? null;
    return phone === null ? null : { href: `tel:${phone}`, words: formatPhone(phone) };
  });
  protected readonly isOpenCall = computed(() => {
    const row = this.call.row();
    return row !== null && isOpen(row.state);
  });
  /** Nothing counts before its safety questions have been asked. */
  protected readonly isCheckFirst = computed(() => {
    const state = this.call.row()?.state;
    return state === 'new' || state === 'checking';
  });
  /** States in which the phone can still settle the call. */
  protected readonly mayConclude = computed(() => this.call.isMine() && this.isOpenCall());
  protected readonly mayReturn = computed(() => {
    const state = this.call.row()?.state;
    return state === 'parts-on-order' || state === 'no-access';
  });

  protected readonly strip = computed(() => {
    const row = this.call.row();
    if (!row) return null;
    return {
      facts: {
        lostAt: row.lostAt,
        restoredAt: row.restoredAt,
        compartments: row.units.flatMap((unit) => unit.compartments),
      },
      places: this.places(),
    };
  });

  /** Why each clock stands where it does, under the unit that it belongs to. */
  protected readonly reasons = computed(() => {
    const detail = this.call.detail();
    if (!detail) return [];
    return detail.units.map((unit, i) => ({
      title: unit.place ? `${UNIT_WORDS[unit.kind]}, ${unit.place}` : UNIT_WORDS[unit.kind],
      sentences: [...new Set((detail.clockReasons[i] ?? []).flat())],
    }));
  });

  /** Where the clocks of this call come from. */
  protected readonly sources = computed(() =>
    sourcesOf(this.strip()?.facts.compartments.map(({ kind }) => kind) ?? []),
  );

  protected readonly urgency = computed(() => {
    const ranked = this.board.ranked().find(({ call }) => call.id === this.callId());
    if (!ranked) return null;
    return {
      lane: LANE_WORDS[ranked.urgency.lane],
      loss: lossWords(ranked.urgency),
      reasons: ranked.urgency.reasons,
      thereAt: this.when(addMinutes(this.clock.now(), this.board.weighing().reachMinutes)),
    };
  });

  protected readonly claimWords = computed(() => {
    const claim = this.call.claim();
    if (!claim) return '';
    const until = this.when(claim.until);
    return this.call.isMine() ? `Yours until ${until}` : `${claim.name} has it until ${until}`;
  });

  protected readonly powerWords = computed(() => {
    const detail = this.call.detail();
    if (!detail) return '';
    const out = `Power went ${this.when(detail.powerOutAt)} (${fromNowWords(detail.powerOutAt, this.clock.now())})`;
    const back =
      detail.powerBackAt === null ? 'still out' : `back ${this.when(detail.powerBackAt)}`;
    const between = detail.powerOnSpans
      .map(({ from, to }) => `, in between back ${this.when(from)} to ${this.when(to)}`)
      .join('');
    return `${out}${between}, ${back}; ${detail.timesFrom === 'area' ? 'as the outage area says' : 'as the caller says'}`;
  });

  /** Of a call in several outage areas: which of them counts, and why. */
  protected readonly areasWords = computed(() => {
    const call = this.board.calls().get(this.callId());
    const place = call?.address.lonLat;
    if (!place) return '';
    return manyAreasWords(place, call.areaId, this.board.areas().values(), (at) => this.when(at));
  });

  constructor() {
    effect(() => {
      const id = this.callId();
      untracked(() => {
        this.call.open(id);
        this.isAmending.set(false);
        this.remark.set('');
      });
    });
    // The check appears once the call has been fetched; the cursor waits for it.
    effect(() => {
      const check = this.check();
      if (!check || !this.wantsCheck()) return;
      this.wantsCheck.set(false);
      check.focus();
    });
    // The form that ended the check goes away with the focus in it; the call keeps the cursor.
    const injector = inject(Injector);
    let mightConclude = false;
    effect(() => {
      const isOver = mightConclude && !this.mayConclude();
      mightConclude = this.mayConclude();
      if (!isOver) return;
      afterNextRender(() => document.activeElement === document.body && this.focus(), { injector });
    });
    const scope = 'Open call';
    inject(Keys).register(
      [
        {
          keys: 'e',
          does: 'Correct or add to the call',
          scope,
          run: () => this.isAmending.set(true),
        },
        { keys: 'Escape', does: 'Close the call', scope, run: () => this.closed.emit() },
      ],
      inject(DestroyRef),
    );
  }

  focus(): void {
    this.panel().nativeElement.focus();
  }

  /** Starts the phone check or goes on with it. */
  async startCheck(): Promise<void> {
    if (!this.call.isMine() && !(await this.call.takeClaim())) return;
    this.wantsCheck.set(true);
  }

  async toggleClaim(): Promise<void> {
    if (this.call.isMine()) await this.call.releaseClaim();
    else await this.call.takeClaim();
  }

  protected conclude(): void {
    this.conclusion()?.focus();
  }

  protected async retry(): Promise<void> {
    await this.call.setback()?.retry?.();
  }

  protected async addRemark(): Promise<void> {
    const text = this.remark().trim();
    if (text !== '' && (await this.call.addRemark(text))) this.remark.set('');
  }

  protected when(at: Instant): string {
    return whenWords(at, this.clock.now(), this.zone.name());
  }

  private places(): readonly string[] {
    const row = this.call.row();
    const facts = this.call.detail()?.units ?? [];
    return (row?.units ?? []).flatMap((unit) => {
      const place = facts.find(({ id }) => id === unit.id)?.place ?? '';
      return unit.compartments.map(() => place || UNIT_WORDS[unit.kind]);
    });
  }
}
