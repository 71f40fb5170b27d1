import {
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  type ElementRef,
  inject,
  output,
  signal,
  untracked,
  viewChild,
  ViewEncapsulation,
} from '@angular/core';
import type { RegionDto } from '@shared/contract/areas';
import type { StopDto } from '@shared/contract/routes';
import { BoardStore } from '../core/board-store';
import { Clock } from '../core/clock';
import { Session } from '../core/session';
import { Theme } from '../core/theme';
import { AgoPipe, ClockTimePipe, Zone } from '../core/zone';
import { MapCredit } from '../ui/map-credit';
import { AreaEditor } from './area-editor';
import { AreaForm } from './area-form';
import { AreaImport } from './area-import';
import { CallPopover } from './call-popover';
import { FeederPick } from './feeder-pick';
import { FileImport } from './file-import';
import { LeafletStage } from './leaflet-stage';
import { MapActions } from './map-actions';
import { MapHands } from './map-hands';
import { MapKeys } from './map-keys';
import { MAP_LAYERS, MapLayers } from './map-layers';
import { MapLegend } from './map-legend';
import { MapLists } from './map-lists';
import { MapPopover } from './map-popover';
import { MapRequests } from './map-requests';
import { MapScenes } from './map-scenes';
import { MapTops } from './map-tops';
import { PinTool } from './pin-tool';
import { scaleBar } from './scale-bar';
import { StormRoadActs } from './storm-road-acts';
import { StormRoadEditor } from './storm-road-editor';
import { StormRoadForm } from './storm-road-form';
import { metresPerPixel } from './world';

/**
 * The storm on a map: calls, pockets, outage areas, technicians and their routes, over tiles of our
 * own server. It asks for nothing and may stand on any screen of the desk, large or small.
 */
@Component({
  selector: 'thaw-storm-map',
  imports: [
    AgoPipe,
    AreaForm,
    AreaImport,
    CallPopover,
    ClockTimePipe,
    MapCredit,
    MapLegend,
    MapLists,
    StormRoadForm,
  ],
  templateUrl: './storm-map.html',
  styleUrls: ['./storm-map.scss', './leaflet-base.scss'],
  encapsulation: ViewEncapsulation.None,
  changeDetection: ChangeDetectionStrategy.OnPush,
  providers: [
    AreaEditor,
    FeederPick,
    FileImport,
    MapActions,
    MapHands,
    MapKeys,
    MapPopover,
    MapRequests,
    MapScenes,
    MapTops,
    PinTool,
    StormRoadActs,
    StormRoadEditor,
  ],
})
export class StormMap {
  protected readonly board = inject(BoardStore);
  protected readonly session = inject(Session);
  protected readonly clock = inject(Clock);
  protected readonly layers = inject(MapLayers);
  protected readonly actions = inject(MapActions);
  protected readonly hands = inject(MapHands);
  protected readonly editor = inject(AreaEditor);
  protected readonly roadEditor = inject(StormRoadEditor);
  protected readonly pin = inject(PinTool);
  protected readonly popover = inject(MapPopover);
  private readonly scenes = inject(MapScenes);
  private readonly tops = inject(MapTops);
  private readonly theme = inject(Theme);
  private readonly zone = inject(Zone);

  /** A call is to be opened, not only selected. */
  readonly opened = output<string>();

  private readonly host = viewChild.required<ElementRef<HTMLElement>>('map');
  private readonly stage = this.actions.stage;

  /** A proposal is there to be shown only while somebody compares it. */
  protected readonly layerNames = computed(() =>
    MAP_LAYERS.filter(({ layer }) => layer !== 'proposal' || this.board.plan() !== null),
  );
  protected readonly shownLayers = computed(
    () => this.layerNames().filter(({ layer }) => this.layers.isShown(layer)).length,
  );
  /** Where the bar is too narrow for all layers they are a list that is opened. */
  protected readonly hasLayerList = signal(false);
  protected readonly panel = this.actions.panel;
  private readonly sight = this.actions.sight;
  protected readonly scale = computed(
    () => {
      const sight = this.sight();
      return sight ? scaleBar(metresPerPixel(sight.lat, sight.zoom)) : null;
    },
    { equal: (a, b) => a?.words === b?.words && a?.widthPx === b?.widthPx },
  );
  private readonly look = computed(() => ({
    theme: this.theme.scheme(),
    hasFeeders: this.layers.isShown('feeders'),
  }));
  protected readonly hasStraightLegs = this.scenes.hasStraightLegs;
  protected readonly popoverPlace = computed(() => {
    this.sight();
    const at = this.popover.at();
    const stage = this.stage();
    return at && stage ? this.popover.placeIn(stage.windowPoint(at), stage.map.getSize()) : null;
  });

  constructor() {
    this.startWhenSized();
    this.showScene();
    this.showTop();
    this.showFinishedOutline();
    this.followLook();
    this.followSelection();
    this.followPanel();
    inject(MapRequests).follow();
    inject(MapKeys).register(() => this.isInSight(), inject(DestroyRef));
  }

  protected open(callId: string): void {
    this.popover.close();
    this.opened.emit(callId);
  }

  protected clockOf({ etaAt, arriveAt }: StopDto): string {
    return this.zone.clockTime(etaAt ?? arriveAt);
  }

  protected takePin(): void {
    const placed = this.pin.placed();
    if (placed) this.pin.take(placed);
  }

  /** Leaflet needs a window with a size; a map in a hidden part of the page waits for it. */
  private startWhenSized(): void {
    const sizes = new ResizeObserver(() => {
      const host = this.host().nativeElement;
      if (host.clientWidth === 0 || host.clientHeight === 0) return;
      const stage = this.stage();
      if (stage) {
        stage.resized();
        // A panel that opens for the selected call takes room, and may take the call out of sight.
        this.bringSelectedIntoSight();
      } else this.start(host);
    });
    effect((onCleanup) => {
      const host = this.host().nativeElement;
      const region = this.session.region();
      if (!region) return;
      untracked(() => this.startAnew(host, region));
      sizes.observe(host);
      onCleanup(() => sizes.unobserve(host));
    });
    inject(DestroyRef).onDestroy(() => {
      sizes.disconnect();
      this.hands.detach();
      this.pin.reset();
      this.stage()?.remove();
    });
  }

  /** Another region is in use: the map of the one before is taken away whole. */
  private startAnew(host: HTMLElement, region: RegionDto): void {
    const stage = this.stage();
    if (!stage || stage.isOf(region)) return;
    this.popover.close();
    this.hands.detach();
    this.pin.reset();
    stage.remove();
    this.stage.set(null);
    this.start(host);
  }

  private start(host: HTMLElement): void {
    const region = this.session.region();
    if (!region) return;
    const { picture } = this.actions;
    const stage = new LeafletStage(host, region, {
      look: this.look(),
      scene: picture,
      paintTop: picture.paintTop,
    });
    const { map } = stage;
    const look = (): void => {
      this.sight.set({ lat: map.getCenter().lat, zoom: map.getZoom() });
      if (this.hands.pointerAt() === null) this.pin.look(stage.centre());
    };
    map.on('move zoomend resize', look);
    this.hands.attach(stage, host, (callId) => this.open(callId));
    this.stage.set(stage);
    look();
  }

  private showScene(): void {
    effect(() => {
      const stage = this.stage();
      this.actions.picture.scene = this.scenes.scene();
      stage?.refresh();
    });
  }

  private showTop(): void {
    effect(() => {
      this.actions.picture.top = this.tops.top();
      this.stage()?.refreshTop();
    });
  }

  /** With its last corner the outline gets a larger form beside it. */
  private showFinishedOutline(): void {
    let wasDrawing = false;
    effect(() => {
      const isDrawing = this.editor.isDrawing();
      const isFinished = wasDrawing && !isDrawing && this.editor.isOpen();
      wasDrawing = isDrawing;
      if (isFinished) untracked(() => this.actions.showOutline());
    });
  }

  private followLook(): void {
    effect(() => {
      const look = this.look();
      this.theme.hasMoreContrast();
      const stage = this.stage();
      // The page takes its new colours in the same turn; they are read when the next frame is drawn.
      this.actions.picture.forgetInk();
      stage?.setLook(look);
      stage?.refresh();
    });
  }

  private followPanel(): void {
    effect(() => {
      const isOpen = this.actions.hasPanel();
      untracked(() => this.actions.fitBesidePanel(isOpen));
    });
  }

  /** What is selected elsewhere is brought into sight, and the map is not moved more than that. */
  private followSelection(): void {
    effect(() => {
      const selected = this.board.selectedCallId();
      untracked(() => {
        if (selected === null || !this.stage() || this.hands.hasTool()) return;
        this.bringSelectedIntoSight();
        this.popover.selectionIs(selected);
      });
    });
  }

  private bringSelectedIntoSight(): void {
    const stage = this.stage();
    const selected = this.board.selectedCallId();
    if (selected === null || !stage || this.hands.hasTool()) return;
    const lonLat = this.board.calls().get(selected)?.address.lonLat;
    if (lonLat && stage.map.getSize().x > 0) stage.bringIntoSight(lonLat);
  }

  private isInSight(): boolean {
    return this.host().nativeElement.clientWidth > 0;
  }
}
