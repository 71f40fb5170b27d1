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
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { MatDialog } from '@angular/material/dialog';
import { MatIcon } from '@angular/material/icon';
import type { CallRow } from '@shared/contract/calls';
import { firstValueFrom } from 'rxjs';
import { Announce } from '../core/announce';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Keys } from '../core/keys';
import { Session } from '../core/session';
import { Zone } from '../core/zone';
import { whenWords } from '../board/time-words';
import { type PlaceAnswer, PlaceDialog, type PlaceQuestion } from './place-dialog';
import { changesNothing } from './plan-comparison';
import { PlanPanel } from './plan-panel';
import { PullDialog, type PullQuestion } from './pull-dialog';
import { RouteBoard } from './route-board';
import { heldCursor, type RouteCursor } from './route-cursor';
import { RouteLegend } from './route-legend';
import { nextShift, type RouteRow, routeRows, type StopView } from './route-rows';
import { FIRST_ZOOM, spanOf, ZOOMS } from './route-ruler';
import { RoutesModel } from './routes-model';
import { routesKeys } from './routes-keys';
import { SearchBar } from './search-bar';
import { StopDetail } from './stop-detail';
import { isFirmStop, isUnderWay, LEGEND_STATES } from './stop-words';
import { TryDialog } from './try-dialog';
import { UnplannedList } from './unplanned-list';
import { whyUnplanned } from './why-unplanned';

/** The routes of all technicians: propose, compare, publish; lock, move, pull and add stops. */
@Component({
  selector: 'thaw-routes-page',
  imports: [MatIcon, PlanPanel, RouteBoard, RouteLegend, SearchBar, StopDetail, UnplannedList],
  templateUrl: './routes-page.html',
  styleUrls: ['../intake/fields.scss', './routes-page.scss'],
  providers: [RoutesModel],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RoutesPage {
  protected readonly model = inject(RoutesModel);
  protected readonly board = inject(BoardStore);
  protected readonly clock = inject(Clock);
  private readonly session = inject(Session);
  private readonly zone = inject(Zone);
  private readonly dialogs = inject(MatDialog);
  private readonly announce = inject(Announce);

  /** From the address: the call that somebody came here with. */
  readonly call = input<string>();

  private readonly routeBoard = viewChild(RouteBoard);
  private readonly list = viewChild(UnplannedList);
  private readonly searchBar = viewChild(SearchBar);
  private readonly setbackBox = viewChild<ElementRef<HTMLElement>>('setbackBox');

  private readonly zoom = signal(FIRST_ZOOM);
  protected readonly pxPerHour = computed(() => ZOOMS[this.zoom()] ?? 90);
  protected readonly drawsProposal = signal(true);
  private readonly placed = signal<RouteCursor | null>(null);

  protected readonly rows = computed(() =>
    routeRows({
      technicians: this.board.technicians(),
      routes: this.board.routes(),
      calls: this.board.calls(),
      stopOfCall: this.board.stopOfCall(),
      plan: this.drawsProposal() ? this.board.plan() : null,
      now: this.clock.now(),
      shopMinutes: this.session.settings()?.shopMinutes ?? 0,
    }),
  );
  /** A closed storm stays on the board to be read, and takes no routes. */
  protected readonly isStormOpen = computed(() => this.board.storm()?.state === 'open');
  protected readonly span = computed(() => {
    const rows = this.rows();
    return spanOf(
      this.clock.now(),
      rows.filter((row) => row.technician.active).flatMap((row) => row.technician.shifts),
      rows.flatMap((row) => [...row.stops, ...row.proposed]),
    );
  });
  protected readonly cursor = computed(() => heldCursor(this.rows(), this.placed()));
  protected readonly selected = computed<{ view: StopView; row: RouteRow } | null>(() => {
    const cursor = this.cursor();
    const row = this.rows().find((one) => one.technician.id === cursor?.technicianId);
    const view = row?.stops.find(({ stop }) => stop.id === cursor?.stopId);
    return row && view ? { row, view } : null;
  });

  protected readonly waiting = computed(() => {
    const onRoute = this.board.stopOfCall();
    const found = this.model.unplanned();
    const technicians = [...this.board.technicians().values()];
    const now = this.clock.now();
    return this.board
      .ranked()
      .filter(({ call }) => call.state === 'waiting' && !onRoute.has(call.id))
      .map(({ call }) => ({
        call,
        why: whyUnplanned(call, technicians, now, found.get(call.id)),
      }));
  });
  private readonly unchecked = computed(
    () => this.board.openCalls().filter((c) => c.state === 'new' || c.state === 'checking').length,
  );
  protected readonly allStops = computed(() => [...this.board.stops().values()]);
  protected readonly countWords = computed(() => {
    const rows = this.rows();
    const onShift = rows.filter((row) => row.isOnShift).length;
    const stops = this.allStops().length;
    return `${onShift} of ${rows.length} technicians on shift, ${stops} ${stops === 1 ? 'stop' : 'stops'}`;
  });
  protected readonly automaticWords = computed(() => {
    switch (this.session.settings()?.automaticRoutes) {
      case 'propose':
        return 'Automatic mode proposes';
      case 'publish':
        return 'Automatic mode publishes within its limits';
      default:
        return '';
    }
  });
  protected readonly emptyWords = computed(() => {
    const unchecked = this.unchecked();
    const more =
      unchecked > 0
        ? ` ${unchecked} ${unchecked === 1 ? 'call waits' : 'calls wait'} for the phone check first.`
        : '';
    return this.allStops().length > 0
      ? `Every waiting call is on a route.${more}`
      : `No call waits for a visit.${more}`;
  });
  protected readonly shiftWords = computed(() => {
    if (this.rows().some((row) => row.isOnShift)) return '';
    const next = nextShift(this.board.technicians().values(), this.clock.now());
    if (!next) return 'Nobody is on shift now, and no later shift is known.';
    const at = whenWords(next.startsAt, this.clock.now(), this.zone.name());
    return `Nobody is on shift now. The next shift begins ${at} (${next.name}).`;
  });

  /** What there is to do while nobody has a stop. */
  protected readonly noneWords = computed(() => {
    const waiting = this.waiting().length;
    if (!this.isStormOpen()) return '';
    if (this.rows().length === 0 || this.board.plan() || this.allStops().length > 0) return '';
    if (waiting === 0) return 'Nobody has a stop, and no call waits for a visit.';
    const calls = waiting === 1 ? '1 call waits' : `${waiting} calls wait`;
    return `Nobody has a stop yet. ${calls} for a visit: R proposes routes.`;
  });

  protected readonly legend = LEGEND_STATES;

  constructor() {
    // Somebody came here with a call: its stop, or its place among those without one.
    let came: string | undefined;
    effect(() => {
      const id = this.call();
      const isLoaded = this.board.isLoaded();
      if (id === undefined || id === came || !isLoaded) return;
      came = id;
      untracked(() => this.goTo(id));
    });
    effect(() => {
      if (this.model.setback()) untracked(() => this.setbackBox()?.nativeElement.focus());
    });
    // A proposal takes room above the list: whoever stands in the list still sees where.
    const injector = inject(Injector);
    effect(() => {
      if (this.board.plan() === null) return;
      afterNextRender(
        () => document.activeElement?.closest('aside') && this.list()?.keepInSight(),
        { injector },
      );
    });
    // What is published leaves the panel and the list, and the focus may go with them.
    // The two may go one after the other.
    let before = { isBeside: false, isWaiting: false };
    effect(() => {
      const now = { isBeside: this.board.plan() !== null, isWaiting: this.waiting().length > 0 };
      const hasLeft = (before.isBeside && !now.isBeside) || (before.isWaiting && !now.isWaiting);
      before = now;
      if (!hasLeft) return;
      afterNextRender(
        () => document.activeElement === document.body && this.routeBoard()?.focus(),
        { injector },
      );
    });
    const open = (): StopView | null => this.selected()?.view ?? null;
    inject(Keys).register(
      routesKeys({
        propose: () => void this.propose(),
        publish: () => void this.publish(),
        discard: () => void this.discard(),
        tryWeights: () => this.tryWeights(),
        hasPlan: () => this.board.plan() !== null,
        mayPublish: () => this.mayPublish(),
        lock: () => void this.lock(),
        move: () => void this.move(),
        pull: () => void this.pull(),
        mayMove: () => open() !== null && !isFirmStop(open()!.stop),
        mayPull: () => open() !== null && !isUnderWay(open()!.stop),
        add: () => void this.addSelected(),
        toUnplanned: () => this.list()?.focus(),
        toRoutes: () => this.routeBoard()?.focus(),
        zoom: (step) => this.zoomBy(step),
        showNow: () => this.routeBoard()?.showNow(),
      }),
      inject(DestroyRef),
    );
  }

  protected async propose(): Promise<void> {
    if (this.rows().length === 0 || !this.isStormOpen()) return;
    await this.model.propose(this.searchBar()?.seconds() ?? 2);
  }

  protected async publish(): Promise<void> {
    const plan = this.board.plan();
    if (plan && this.mayPublish() && !this.model.isBusy()) await this.model.publish(plan);
  }

  private mayPublish(): boolean {
    const plan = this.board.plan();
    return plan !== null && !changesNothing(plan, this.allStops());
  }

  protected async discard(): Promise<void> {
    const plan = this.board.plan();
    if (plan && !this.model.isBusy()) await this.model.discard(plan);
  }

  /** Other weights are tried beside the routes; nothing of it is kept. */
  protected tryWeights(): void {
    if (!this.isStormOpen()) return;
    this.dialogs.open(TryDialog, { width: '980px', maxWidth: '96vw', restoreFocus: true });
  }

  protected zoomBy(step: number): void {
    const zoom = (): void =>
      this.zoom.update((now) => Math.min(Math.max(now + step, 0), ZOOMS.length - 1));
    const board = this.routeBoard();
    if (board) board.keepLeftEdge(zoom);
    else zoom();
  }

  protected putCursor(cursor: RouteCursor): void {
    this.placed.set(cursor);
    const callId = this.selected()?.view.stop.callId;
    if (callId !== undefined) this.board.selectedCallId.set(callId);
  }

  protected async lock(): Promise<void> {
    const view = this.selected()?.view;
    if (!view || this.model.isBusy() || isFirmStop(view.stop)) return;
    const locked = !view.stop.locked;
    if (await this.model.lock(view.stop, locked)) {
      this.announce.say(`Call ${view.number} ${locked ? 'is locked' : 'is free'}.`);
    }
  }

  protected async move(): Promise<void> {
    const selected = this.selected();
    if (!selected?.view.call || isFirmStop(selected.view.stop)) return;
    const answer = await this.askPlace({
      title: `Move call ${selected.view.number}`,
      call: selected.view.call,
      rows: this.rows(),
      technicianId: selected.row.technician.id,
    });
    if (answer) await this.moveTo(selected.view, answer);
    this.routeBoard()?.focus();
  }

  /** The end of the dialog, and of a drag. */
  protected async moveTo(view: StopView, { technicianId, position }: PlaceAnswer): Promise<void> {
    const { stop, number } = view;
    if (stop.technicianId === technicianId && stop.position === position) return;
    this.placed.set({ technicianId, stopId: stop.id });
    if (!(await this.model.move(stop, technicianId, position))) return;
    const name = this.board.technicians().get(technicianId)?.name ?? '';
    this.announce.notice(`Call ${number} is now with ${name}.`, {
      label: 'Undo',
      run: () => void this.undoMove(stop.id, stop.technicianId, stop.position),
    });
  }

  protected async pull(): Promise<void> {
    const selected = this.selected();
    if (!selected || isUnderWay(selected.view.stop)) return;
    const question: PullQuestion = {
      view: selected.view,
      technicianName: selected.row.technician.name,
    };
    const asked = this.dialogs.open<PullDialog, PullQuestion, string>(PullDialog, {
      data: question,
      restoreFocus: false,
    });
    const reason = await firstValueFrom(asked.afterClosed());
    if (reason !== undefined && (await this.model.pull(selected.view.stop, reason))) {
      this.announce.notice(`Call ${selected.view.number} is off its route and waits again.`);
    }
    this.routeBoard()?.focus();
  }

  protected async add(call: CallRow): Promise<void> {
    if (this.rows().length === 0 || !this.isStormOpen()) return;
    const answer = await this.askPlace({
      title: `Put call ${call.number} on a route`,
      call,
      rows: this.rows(),
      technicianId: this.placed()?.technicianId ?? null,
    });
    if (!answer) return this.list()?.focus();
    const stopId = await this.model.add(call, answer.technicianId, answer.position);
    if (stopId === null) return;
    this.placed.set({ technicianId: answer.technicianId, stopId });
    const name = this.board.technicians().get(answer.technicianId)?.name ?? '';
    this.announce.notice(`Call ${call.number} is on the route of ${name}.`);
    this.list()?.focus();
  }

  protected async retry(): Promise<void> {
    await this.model.setback()?.retry?.();
  }

  private async addSelected(): Promise<void> {
    const id = this.board.selectedCallId();
    const one = this.waiting().find(({ call }) => call.id === id);
    if (one) await this.add(one.call);
    else this.list()?.focus();
  }

  private async askPlace(question: PlaceQuestion): Promise<PlaceAnswer | undefined> {
    const asked = this.dialogs.open<PlaceDialog, PlaceQuestion, PlaceAnswer>(PlaceDialog, {
      data: question,
      restoreFocus: false,
    });
    return firstValueFrom(asked.afterClosed());
  }

  private async undoMove(stopId: string, technicianId: string, position: number): Promise<void> {
    // As it is now: the move gave it a new version.
    const stop = this.board.stops().get(stopId);
    if (stop && (await this.model.move(stop, technicianId, position))) {
      this.announce.say('The stop is back where it was.');
    }
  }

  private goTo(callId: string): void {
    this.board.selectedCallId.set(callId);
    const stop = this.board.stopOfCall().get(callId);
    if (stop) {
      this.placed.set({ technicianId: stop.technicianId, stopId: stop.id });
      this.routeBoard()?.focus();
    } else setTimeout(() => this.list()?.focus());
  }
}
