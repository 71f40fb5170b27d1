import { computed, inject, Injectable, signal } from '@angular/core';
import type { LeafletMouseEvent } from 'leaflet';
import type { LonLat } from '@shared/contract/common';
import { BoardStore } from '../core/board-store';
import { AreaEditor } from './area-editor';
import { FeederPick } from './feeder-pick';
import type { LeafletStage } from './leaflet-stage';
import { MapActions } from './map-actions';
import type { MapHit } from './map-picture';
import { MapPopover } from './map-popover';
import { ARROWS, lonLatOf, OutlineHands, reachOf } from './outline-hands';
import { PinTool } from './pin-tool';
import { StormRoadEditor } from './storm-road-editor';

const PAN_PX = 80;
const FINE_PAN_PX = 10;
const HOVER_AFTER_MS = 120;
/** How far beside a mark a pointer or a finger still means it. */
const MOUSE_SLACK_PX = 3;
const TOUCH_SLACK_PX = 12;

/** Pointer, finger and keys on the map: what a click does at a place, Enter does at the cross-hair. */
@Injectable()
export class MapHands {
  private readonly board = inject(BoardStore);
  private readonly actions = inject(MapActions);
  private readonly editor = inject(AreaEditor);
  private readonly feeders = inject(FeederPick);
  private readonly roadEditor = inject(StormRoadEditor);
  private readonly popover = inject(MapPopover);
  private readonly pin = inject(PinTool);

  private outline: OutlineHands | null = null;
  private roadOutline: OutlineHands | null = null;
  private hoverTimer: ReturnType<typeof setTimeout> | undefined;
  private pointerType = 'mouse';
  private isMapDragged = false;

  /** The keys were used last. */
  readonly isByKeys = signal(false);
  /** Where the pointer is; `null` when it is not on the map. */
  readonly pointerAt = signal<LonLat | null>(null);
  readonly hasTool = computed(
    () => this.pin.isOn() || this.editor.isOpen() || this.roadEditor.isOpen(),
  );
  readonly hasCrossHair = computed(
    () =>
      this.pointerAt() === null &&
      (this.isByKeys() ||
        this.pin.isOn() ||
        this.editor.isDrawing() ||
        (this.roadEditor.isOpen() && !this.roadEditor.outline().isClosed)),
  );

  /** @param opened a call was clicked twice */
  attach(stage: LeafletStage, host: HTMLElement, opened: (callId: string) => void): void {
    const { map } = stage;
    host.addEventListener('pointerdown', (event) => (this.pointerType = event.pointerType), {
      capture: true,
    });
    this.outline = new OutlineHands(stage, this.editor);
    const roads = this.roadEditor;
    this.roadOutline = new OutlineHands(stage, {
      isOpen: () => roads.isOpen() && roads.drawsArea(),
      isDrawing: () => roads.isDrawing(),
      outline: () => roads.outline(),
      addCorner: (corner) => roads.addCorner(corner),
      finish: () => roads.finish(),
      select: (index) => roads.select(index),
      shape: (step) => roads.shape(step),
      drag: (step) => roads.drag(step),
      undo: () => roads.undo(),
      whole: () => null,
    });
    map.on('click', (event) => {
      host.focus({ preventScroll: true });
      this.act(stage, lonLatOf(event), this.pointerType);
    });
    map.on('dblclick', (event) => this.clickTwice(stage, event, opened));
    map.on('mousemove', (event) => this.hover(stage, event));
    map.on('mouseout', () => this.leave());
    map.on('dragstart', () => (this.isMapDragged = true));
    map.on('dragend', () => (this.isMapDragged = false));
  }

  detach(): void {
    clearTimeout(this.hoverTimer);
  }

  press(event: KeyboardEvent): void {
    const stage = this.actions.stage();
    if (!stage || event.altKey) return;
    if (this.pressed(stage, event)) {
      this.isByKeys.set(true);
      event.preventDefault();
      event.stopPropagation();
    }
  }

  private pressed(stage: LeafletStage, event: KeyboardEvent): boolean {
    const isOutline = this.editor.isOpen() && !this.feeders.isOn();
    if (isOutline && this.outline?.press(event)) return true;
    if (this.roadEditor.isOpen() && this.roadOutline?.press(event)) return true;
    if (event.ctrlKey || event.metaKey) return false;
    const step = ARROWS[event.key];
    if (step) {
      // A pointer that was left lying on the map is no longer what points.
      this.pointerAt.set(null);
      const px = event.shiftKey ? FINE_PAN_PX : PAN_PX;
      stage.map.panBy([step[0] * px, step[1] * px], { animate: !event.shiftKey });
      return true;
    }
    switch (event.key) {
      case '+':
      case '=':
        stage.zoomBy(1);
        return true;
      case '-':
        stage.zoomBy(-1);
        return true;
      case 'Home':
        this.actions.show('all');
        return true;
      case 'Enter':
        this.act(stage, stage.centre(), 'mouse');
        return true;
      default:
        return false;
    }
  }

  private act(stage: LeafletStage, at: LonLat, pointerType: string): void {
    if (this.pin.isOn()) {
      if (pointerType === 'touch') this.pin.put(at);
      else this.pin.take(at);
    } else if (this.feeders.isOn()) {
      const feeder = this.feeders.at(at);
      if (feeder) this.feeders.toggle(feeder);
    } else if (this.editor.isOpen()) {
      this.outline?.click(at, reachOf(pointerType));
    } else if (this.roadEditor.isOpen()) {
      if (this.roadEditor.drawsArea()) this.roadOutline?.click(at, reachOf(pointerType));
      else void this.roadEditor.pick(at);
    } else {
      const slack = pointerType === 'touch' ? TOUCH_SLACK_PX : MOUSE_SLACK_PX;
      const point = stage.worldPixel(stage.windowPoint(at));
      this.choose(this.actions.picture.hit(point, slack));
    }
  }

  private choose(hit: MapHit | null): void {
    this.popover.close();
    switch (hit?.kind) {
      case 'calls': {
        const [first] = hit.marks;
        if (first && hit.marks.length === 1) this.actions.select(first.call.id);
        this.popover.pinCalls(hit.marks);
        return;
      }
      case 'technician':
        this.actions.chooseTechnician(hit.technicianId);
        return;
      case 'pocket': {
        const pocket = this.board.pockets().find(({ key }) => key === hit.pocketKey);
        if (pocket) this.actions.choosePocket(pocket);
        return;
      }
      case 'area': {
        const area = this.board.areas().get(hit.areaId);
        if (area) this.actions.change(area);
        return;
      }
      case 'storm-road': {
        const road = this.board.stormRoads().get(hit.roadId);
        if (road) this.actions.changeRoad(road);
        return;
      }
      default:
        this.actions.chooseTechnician(null);
    }
  }

  private clickTwice(
    stage: LeafletStage,
    event: LeafletMouseEvent,
    opened: (callId: string) => void,
  ): void {
    if (this.hasTool()) return;
    const point = stage.worldPixel(event.containerPoint);
    const hit = this.actions.picture.hit(point, MOUSE_SLACK_PX);
    const [first] = hit?.kind === 'calls' ? hit.marks : [];
    if (first && hit?.kind === 'calls' && hit.marks.length === 1) opened(first.call.id);
    else if (!hit) stage.map.setZoomAround(event.latlng, stage.map.getZoom() + 1);
  }

  private hover(stage: LeafletStage, event: LeafletMouseEvent): void {
    if (
      this.pointerType === 'touch' ||
      this.isMapDragged ||
      this.outline?.isDragging ||
      this.roadOutline?.isDragging
    )
      return;
    const at = lonLatOf(event);
    this.isByKeys.set(false);
    this.pointerAt.set(at);
    if (this.hasTool()) {
      this.pin.look(at);
      return;
    }
    const hit = this.actions.picture.hit(stage.worldPixel(event.containerPoint), MOUSE_SLACK_PX);
    stage.map.getContainer().classList.toggle('can-choose', hit !== null);
    const marks = hit?.kind === 'calls' ? hit.marks : [];
    this.board.hoveredCallId.set(marks.length === 1 ? (marks[0]?.call.id ?? null) : null);
    clearTimeout(this.hoverTimer);
    if (this.popover.showsSame(marks)) return;
    this.hoverTimer = setTimeout(() => this.popover.hoverCalls(marks), HOVER_AFTER_MS);
  }

  private leave(): void {
    clearTimeout(this.hoverTimer);
    this.pointerAt.set(null);
    if (this.hasTool()) return;
    this.board.hoveredCallId.set(null);
    this.popover.hoverCalls([]);
  }
}
