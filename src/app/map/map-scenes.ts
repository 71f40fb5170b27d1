import { computed, inject, Injectable, signal } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { MINUTE_MS } from '@shared/domain/instant';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { rankedCall } from '../core/ranking';
import { Session } from '../core/session';
import { duration, Zone } from '../core/zone';
import { AreaEditor } from './area-editor';
import { FeederPick } from './feeder-pick';
import { FileImport } from './file-import';
import { areaTimesWords, pocketWords } from './area-words';
import { type CallMark, callMark, CallMarks } from './call-mark';
import { MapLayers } from './map-layers';
import { areaShape } from './paint-areas';
import { feederShape, groundRings } from './paint-ground';
import { pocketShape } from './paint-pockets';
import { stormRoadMark } from './paint-storm-roads';
import { townMark } from './paint-towns';
import { RoadWays } from './road-ways';
import { proposedRoute, type RouteGround, routeShape } from './route-shape';
import type { MapScene } from './scene/map-scene';
import { StormRoadEditor } from './storm-road-editor';
import { KIND_WORDS, spanWords, tenseOf } from './storm-road-words';

/** Makes what the map draws from what the board knows; each part anew only when it has changed. */
@Injectable()
export class MapScenes {
  private readonly board = inject(BoardStore);
  private readonly session = inject(Session);
  private readonly clock = inject(Clock);
  private readonly zone = inject(Zone);
  private readonly layers = inject(MapLayers);
  private readonly editor = inject(AreaEditor);
  private readonly ways = inject(RoadWays);
  private readonly roadEditor = inject(StormRoadEditor);
  private readonly feederPick = inject(FeederPick);
  private readonly files = inject(FileImport);

  /** Whose route is drawn strongest, unless a call on another route is selected. */
  readonly chosenTechnicianId = signal<string | null>(null);

  private readonly minute = computed(() => Math.floor(this.clock.now() / MINUTE_MS) * MINUTE_MS);
  private readonly callMarks = new CallMarks();

  private readonly marks = computed(() =>
    this.layers.isShown('calls') ? this.callMarks.of(this.board.shown(), this.minute()) : [],
  );

  private readonly areas = computed(() => {
    if (!this.layers.isShown('areas')) return [];
    const edited = this.editor.isOpen() ? this.editor.base()?.id : undefined;
    return [...this.board.areas().values()]
      .filter(({ id }) => id !== edited)
      .map((area) => areaShape(area, areaTimesWords(area, this.minute(), this.zone.name())));
  });

  /** What is over stays in the list, not on the map. */
  private readonly stormRoads = computed(() => {
    if (!this.layers.isShown('storm-roads')) return [];
    const edited = this.roadEditor.isOpen() ? this.roadEditor.base()?.id : undefined;
    const now = this.clock.now();
    return [...this.board.stormRoads().values()]
      .filter((road) => road.id !== edited && tenseOf(road, now) !== 'over')
      .map((road) =>
        stormRoadMark(road, tenseOf(road, now), {
          title: `${KIND_WORDS[road.kind]}: ${road.name}`,
          span: spanWords(road, now, this.zone.name()),
        }),
      );
  });

  private readonly pockets = computed(() =>
    this.layers.isShown('pockets')
      ? this.board
          .pockets()
          .map((pocket) =>
            pocketShape(pocket, pocketWords(pocket, this.minute(), this.zone.name())),
          )
      : [],
  );

  /** Ways are asked for only while routes are shown. */
  private readonly routeGround = computed((): RouteGround => {
    const calls = this.board.calls();
    const isShown = this.layers.isShown('routes');
    return {
      placeOf: (callId) => calls.get(callId)?.address.lonLat ?? null,
      wayOf: (from, to) => (isShown ? this.ways.way(from, to) : null),
    };
  });

  private readonly routes = computed(() => {
    const ground = this.routeGround();
    const now = this.minute();
    return [...this.board.technicians().values()]
      .filter(({ active }) => active)
      .map((technician) =>
        routeShape(technician, this.board.routes().get(technician.id) ?? [], ground, now, duration),
      );
  });

  /** What the proposal in hand would make of the routes. */
  private readonly proposal = computed(() => {
    const plan = this.board.plan();
    if (!plan || !this.layers.isShown('proposal')) return [];
    const ground = this.routeGround();
    const technicians = this.board.technicians();
    return plan.routes.flatMap((route) => {
      const technician = technicians.get(route.technicianId);
      return technician ? [proposedRoute(technician, route, ground)] : [];
    });
  });

  private readonly towns = computed(() => (this.session.region()?.towns ?? []).map(townMark));

  /** Some route is drawn straight, because no road is known. */
  readonly hasStraightLegs = computed(
    () =>
      this.layers.isShown('routes') &&
      this.routes().some(({ legs }) => legs.some(({ way }) => way === null)),
  );

  readonly scene = computed<MapScene>(() => ({
    marks: this.marks(),
    areas: this.areas(),
    stormRoads: this.stormRoads(),
    pockets: this.pockets(),
    routes: this.routes(),
    proposal: this.proposal(),
    towns: this.towns(),
    hasRoutes: this.layers.isShown('routes'),
    hasTechnicians: this.layers.isShown('technicians'),
    chosenPocketKey: this.board.filter().pocketKey,
    chosenTechnicianId: this.board.selectedCall()?.technicianId ?? this.chosenTechnicianId(),
  }));

  /** What is about to become outage areas. */
  readonly grounds = computed(() => {
    const whole = this.editor.isOpen() ? this.editor.whole() : null;
    const shapes = this.files.chosen().map(({ area }) => area.shape);
    return (whole ? [whole, ...shapes] : shapes).map(groundRings);
  });
  readonly feeders = computed(() => {
    if (!this.feederPick.isOn()) return [];
    const chosen = this.feederPick.chosenIds();
    return (this.feederPick.feeders() ?? []).map((one) => feederShape(one, chosen.has(one.id)));
  });

  readonly selectedMark = computed(() => this.markOf(this.board.selectedCallId()));
  readonly hoveredMark = computed(() => this.markOf(this.board.hoveredCallId()));

  /** Where all open calls are that the filter lets through. */
  callPlaces(): LonLat[] {
    return this.board
      .shown()
      .flatMap(({ call }) => (call.address.lonLat ? [call.address.lonLat] : []));
  }

  pocketOfSelection() {
    const selected = this.board.selectedCallId();
    const { pocketKey } = this.board.filter();
    const pockets = this.board.pockets();
    return (
      pockets.find(({ callIds }) => selected !== null && callIds.includes(selected)) ??
      pockets.find(({ key }) => key === pocketKey) ??
      null
    );
  }

  /** Also of a call that the filter keeps off the map: what is selected is always seen. */
  private markOf(callId: string | null): CallMark | null {
    const call = this.board.calls().get(callId ?? '');
    if (!call) return null;
    const now = this.minute();
    return callMark(rankedCall(call, now, this.board.weighing()), now);
  }
}
