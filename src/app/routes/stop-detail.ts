import { ChangeDetectionStrategy, Component, computed, inject, input, output } from '@angular/core';
import { MatIcon } from '@angular/material/icon';
import { RouterLink } from '@angular/router';
import type { Instant } from '@shared/domain/instant';
import { ColdStrip } from '../board/cold-strip';
import { stripFactsOf } from '../board/cold-strip-scale';
import { whenWords } from '../board/time-words';
import { clockTime, Zone } from '../core/zone';
import { addressWords } from '../intake/address-words';
import type { StopView } from './route-rows';
import { verdictWords } from './save-verdict';
import { fetchWords } from './fetch-words';
import { isFirmStop, isUnderWay, STOP_STATE_WORDS } from './stop-words';

/** The stop that the cursor is on: what it is, why it stands there, and what can be done with it. */
@Component({
  selector: 'thaw-stop-detail',
  imports: [ColdStrip, MatIcon, RouterLink],
  template: `
    @let one = view();
    <div class="what">
      <p class="title">
        <a [routerLink]="['/board']" [queryParams]="{ call: one.stop.callId }"
          >Call {{ one.number }}</a
        >
        <span class="state">
          <mat-icon [svgIcon]="stateWords[one.stop.state].icon" aria-hidden="true" />
          {{ stateWords[one.stop.state].word }}
        </span>
        @if (one.stop.locked) {
          <span class="state"><mat-icon svgIcon="lock" aria-hidden="true" /> Locked</span>
        }
        @if (one.call?.danger) {
          <span class="danger"><mat-icon svgIcon="warning" aria-hidden="true" /> Danger</span>
        }
        @if (one.stop.isUnreachable) {
          <span class="danger">
            <mat-icon svgIcon="warning" aria-hidden="true" /> No open road
          </span>
        }
        @if (one.call; as call) {
          <span class="name">{{ call.name }}, {{ addressWords(call.address) }}</span>
        }
      </p>
      <p class="because" [title]="because()">{{ because() }}</p>
      <p class="soft">
        {{ times() }}
        @if (one.late; as late) {
          <strong class="late">{{ late.words }}.</strong>
        }
      </p>
    </div>
    @if (one.call; as call) {
      <div class="cold">
        <thaw-cold-strip [facts]="facts(call)" [now]="now()" />
        <p class="verdict">{{ verdict() }}</p>
      </div>
    }
    <div class="acts">
      <button
        type="button"
        class="plain"
        [disabled]="isBusy() || isFirm()"
        (click)="lockToggled.emit()"
      >
        {{ one.stop.locked ? 'Unlock' : 'Lock' }} <kbd>L</kbd>
      </button>
      <button type="button" class="plain" [disabled]="isBusy() || isFirm()" (click)="moved.emit()">
        Move <kbd>M</kbd>
      </button>
      <button
        type="button"
        class="plain"
        [disabled]="isBusy() || isUnderWay()"
        (click)="pulled.emit()"
      >
        Pull <kbd>P</kbd>
      </button>
      @if (isFirm()) {
        <span class="soft firm">{{
          isUnderWay() ? 'Under way: it stays.' : 'Accepted: it moves only if you pull it.'
        }}</span>
      }
    </div>
  `,
  styleUrls: ['../intake/fields.scss', './stop-detail.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class StopDetail {
  private readonly zone = inject(Zone);

  readonly view = input.required<StopView>();
  readonly technicianName = input.required<string>();
  readonly now = input.required<Instant>();
  readonly isBusy = input(false);

  readonly lockToggled = output();
  readonly moved = output();
  readonly pulled = output();

  protected readonly stateWords = STOP_STATE_WORDS;
  protected readonly facts = stripFactsOf;
  protected readonly addressWords = addressWords;
  protected readonly isFirm = computed(() => isFirmStop(this.view().stop));
  protected readonly isUnderWay = computed(() => isUnderWay(this.view().stop));
  protected readonly verdict = computed(() => {
    const { verdict } = this.view();
    return verdict ? verdictWords(verdict) : '';
  });
  protected readonly because = computed(() => {
    const { because, fetches } = this.view().stop;
    const words = `${this.technicianName()}: ${because}`;
    return fetches ? `${words} By the store first: ${fetchWords(fetches)}.` : words;
  });
  protected readonly times = computed(() => {
    const { arriveAt, finishAt, driveMinutes, stop } = this.view();
    const zone = this.zone.name();
    const drive = `${Math.round(driveMinutes)} min of driving`;
    if (stop.isUnreachable && stop.state !== 'on-site') {
      const was = whenWords(arriveAt, this.now(), zone);
      const told = stop.state === 'travelling' ? ' Ring the customer and the technician.' : '';
      return `No open road leads there: the arrival (${was} before) cannot be kept.${told}`;
    }
    const arrival = stop.state === 'on-site' ? 'Arrived' : 'Arrives';
    return `${drive}. ${arrival} ${whenWords(arriveAt, this.now(), zone)}, done ${clockTime(finishAt, zone)}.`;
  });
}
