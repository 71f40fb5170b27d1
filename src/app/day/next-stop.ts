import { NgTemplateOutlet } from '@angular/common';
import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import type { StopCard, TechnicianDto } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import { PART_WORDS } from '@shared/domain/skills';
import { ColdStrip } from '../board/cold-strip';
import { stripFactsOf, stripState } from '../board/cold-strip-scale';
import { COMPARTMENT_WORDS, UNIT_WORDS } from '../board/compartment-words';
import { SKILL_WORDS } from '../board/queue-words';
import { fromNowWords, whenWords } from '../board/time-words';
import { Zone } from '../core/zone';
import { placeDoubt } from '../intake/address-words';
import { fetchWords } from '../routes/fetch-words';
import { saveVerdict, valuedFactsOf, verdictWords } from '../routes/save-verdict';
import { STOP_STATE_WORDS } from '../routes/stop-words';
import {
  cautionsFor,
  geoLink,
  lostContentsWords,
  partsToBring,
  phoneWords,
  WHEEL_WORDS,
} from './day-words';
import { RingDesk } from './ring-desk';
import { WaitGate } from './wait-gate';

/** The stop to act on, large enough for an arm's length, sun and rain. */
@Component({
  selector: 'thaw-next-stop',
  imports: [ColdStrip, MatIcon, NgTemplateOutlet, RingDesk, WaitGate],
  templateUrl: './next-stop.html',
  styleUrl: './next-stop.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class NextStop {
  private readonly zone = inject(Zone);

  readonly card = input.required<StopCard>();
  readonly technician = input.required<TechnicianDto>();
  readonly now = input.required<Instant>();
  /** `false` while the phone has no connection: times are then those of before. */
  readonly isCurrent = input(true);

  protected readonly stateWords = STOP_STATE_WORDS;
  protected readonly phoneWords = phoneWords;
  protected readonly unitWords = UNIT_WORDS;
  protected readonly partWords = PART_WORDS;
  protected readonly skillWords = SKILL_WORDS;

  protected readonly fetchWords = fetchWords;
  protected readonly wheelWords = WHEEL_WORDS;

  protected readonly geo = computed(() => geoLink(this.card()));
  /** Where the point on the map is, when it is not the house's own. */
  protected readonly doubt = computed(() => {
    const { kind } = this.card().address;
    return kind === 'pin' ? 'where somebody pointed' : placeDoubt(kind);
  });
  protected readonly cautions = computed(() => cautionsFor(this.card()));
  protected readonly isOnSite = computed(() => this.card().stop.state === 'on-site');
  protected readonly strip = computed(() => stripFactsOf({ ...this.card(), restoredAt: null }));
  protected readonly places = computed(() =>
    this.card().units.flatMap((unit) =>
      unit.compartments.map(() => unit.place || UNIT_WORDS[unit.kind]),
    ),
  );
  /** What the technician tells the household of what cannot be saved any more. */
  protected readonly lostWords = computed(() => {
    const { compartments } = this.strip();
    return lostContentsWords(
      compartments.filter((one) => stripState(one, null, this.now()) === 'lost'),
    );
  });
  protected readonly parts = computed(() => partsToBring(this.card(), this.technician().van));
  protected readonly lacking = computed(() =>
    this.card().skills.filter((skill) => !this.technician().skills.includes(skill)),
  );

  /** The large line: when, in the sense of the state. */
  protected readonly when = computed(() => {
    const { state, arriveAt, etaAt, isUnreachable } = this.card().stop;
    const at = etaAt ?? arriveAt;
    const clock = whenWords(at, this.now(), this.zone.name());
    if (state === 'on-site') return `Arrived ${clock}`;
    // The time of before would read like a promise.
    if (isUnreachable) return 'Nobody knows when';
    // A moment that has passed is no promise any more; the desk plans anew, or the van is late.
    if (at < this.now()) {
      const was = state === 'travelling' ? 'Was to arrive' : 'Was planned for';
      return `${was} ${clock}, ${fromNowWords(at, this.now())}`;
    }
    if (state === 'travelling') return `Arrive ${clock}, ${fromNowWords(at, this.now())}`;
    return `About ${clock}`;
  });
  protected readonly drive = computed(() => {
    const { state, driveMinutes, etaAt, arriveAt, isUnreachable } = this.card().stop;
    if (isUnreachable && state !== 'on-site') {
      return `It was ${whenWords(etaAt ?? arriveAt, this.now(), this.zone.name())} while a road led there.`;
    }
    // Under way the large line says it better.
    if (state === 'travelling') return '';
    return state === 'on-site' ? '' : `${Math.max(1, Math.round(driveMinutes))} min of driving`;
  });
  protected readonly verdict = computed(() => {
    const { arriveAt, etaAt, finishAt, state, isUnreachable } = this.card().stop;
    if (isUnreachable && state !== 'on-site')
      return 'No road leads there now: nothing is saved yet';
    const end = Math.max(finishAt + ((etaAt ?? arriveAt) - arriveAt), arriveAt);
    return verdictWords(saveVerdict(valuedFactsOf(this.card()), end, this.now()));
  });

  protected compartments(unit: StopCard['units'][number]): string {
    return unit.compartments
      .map(({ kind }) => COMPARTMENT_WORDS[kind].name.toLowerCase())
      .join(', ');
  }
}
