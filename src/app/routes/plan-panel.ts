import { ChangeDetectionStrategy, Component, computed, inject, input, output } from '@angular/core';
import type { CallRow } from '@shared/contract/calls';
import type { PlanDto, StopDto, TechnicianDto } from '@shared/contract/routes';
import type { Instant } from '@shared/domain/instant';
import { ago, money, Zone } from '../core/zone';
import {
  changesByTechnician,
  changesNothing,
  changeWords,
  figureLines,
  routeWords,
} from './plan-comparison';
import { PlanFiguresTable } from './plan-figures-table';

/** The proposal beside the routes in force: what it saves and costs, and what it changes for whom. */
@Component({
  selector: 'thaw-plan-panel',
  imports: [PlanFiguresTable],
  template: `
    <h2>
      Proposal
      <span class="soft">by {{ plan().proposedBy }}, {{ age() }}</span>
    </h2>
    @if (plan().automatic; as automatic) {
      <p class="soft">
        Planned anew since {{ automatic.because }}.
        @if (automatic.heldBack) {
          <strong>Not published by itself: {{ automatic.heldBack }}.</strong>
        }
      </p>
    }
    <thaw-plan-figures-table
      caption="The proposal against the routes in force"
      [plans]="['In force', 'Proposed']"
      [rows]="figures()"
    />
    @if (gain(); as words) {
      <p class="soft source">{{ words }}</p>
    }
    @if (plan().drivesFrom; as source) {
      <p class="soft source">Drives: {{ source }}</p>
    }
    <details [open]="changed().length > 0 && changed().length <= 4">
      <summary>{{ summary() }}</summary>
      <ul>
        @for (one of changed(); track one.technicianId) {
          <li>
            <strong>{{ one.name }}</strong>
            @if (one.unchanged > 0) {
              <span class="soft">{{ one.unchanged }} as before</span>
            }
            <span class="words">{{ one.words }}</span>
            @if (one.route) {
              <span class="words soft">The route then {{ one.route }}.</span>
            }
          </li>
        }
      </ul>
    </details>
    <div class="acts">
      @if (nothing(); as words) {
        <p>{{ words }}</p>
      } @else {
        <button type="button" class="plain main" [disabled]="isBusy()" (click)="published.emit()">
          Publish <kbd>Ctrl Enter</kbd>
        </button>
      }
      <button
        type="button"
        class="plain"
        [class.main]="nothing() !== ''"
        [disabled]="isBusy()"
        (click)="discarded.emit()"
      >
        {{ nothing() ? 'Close' : 'Discard' }} <kbd>X</kbd>
      </button>
    </div>
  `,
  styleUrls: ['../intake/fields.scss', './plan-panel.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PlanPanel {
  private readonly zone = inject(Zone);

  readonly plan = input.required<PlanDto>();
  readonly stops = input.required<readonly StopDto[]>();
  readonly calls = input.required<ReadonlyMap<string, CallRow>>();
  readonly technicians = input.required<ReadonlyMap<string, TechnicianDto>>();
  readonly now = input.required<Instant>();
  readonly isBusy = input(false);

  readonly published = output();
  readonly discarded = output();

  protected readonly figures = computed(() =>
    figureLines(this.plan()).map(({ label, inForce, proposed, difference, turn }) => ({
      label,
      figures: [inForce, proposed],
      difference,
      turn,
    })),
  );
  protected readonly age = computed(
    () =>
      `${this.zone.clockTime(this.plan().proposedAt)}, ${ago(this.plan().proposedAt, this.now())}`,
  );

  private readonly changes = computed(() => changesByTechnician(this.plan(), this.stops()));
  protected readonly changed = computed(() =>
    this.changes()
      .filter(({ changes }) => changes.length > 0)
      .map(({ technicianId, changes, unchanged }) => ({
        technicianId,
        unchanged,
        name: this.nameOf(technicianId),
        route: this.routeOf(technicianId),
        words: changes.map((one) => changeWords(one, this.numberOf, this.nameOf)).join('; '),
      })),
  );
  protected readonly summary = computed(() => {
    const changed = this.changed().length;
    const same = this.changes().length - changed;
    if (changed === 0) return 'Nothing changes for anybody';
    const who = changed === 1 ? '1 technician' : `${changed} technicians`;
    return `What changes for ${who}${same > 0 ? `; ${same} as before` : ''}`;
  });

  /** The difference that the search was after, with the price of every change in it. */
  protected readonly gain = computed(() => {
    const { gainCents } = this.plan();
    if (gainCents === undefined) return '';
    return gainCents < 100
      ? 'By the weights that are set it gains nothing.'
      : `By the weights that are set it gains ${money(gainCents)}, the price of its changes counted.`;
  });

  /** Why there is nothing to publish; empty where there is something. */
  protected readonly nothing = computed(() => {
    if (!changesNothing(this.plan(), this.stops())) return '';
    return this.plan().figures.stops === 0
      ? 'Nothing to publish: no call can go on a route now.'
      : 'Nothing to publish: the routes in force stay as they are.';
  });

  private routeOf(technicianId: string): string {
    const figures = this.plan().routes.find((one) => one.technicianId === technicianId)?.figures;
    return figures ? routeWords(figures) : '';
  }

  private readonly numberOf = (callId: string): string =>
    String(this.calls().get(callId)?.number ?? '?');
  private readonly nameOf = (id: string): string =>
    this.technicians().get(id)?.name ?? 'a technician who left';
}
