import type { LeafletMouseEvent, Point } from 'leaflet';
import type { LonLat } from '@shared/contract/common';
import type { LeafletStage } from './leaflet-stage';
import { insertCorner, moveCorner, type Outline, removeCorner, selectNext } from './outline';
import { type OutlineHit, outlineHit } from './paint-outline';
import type { WorldPoint } from './world';

/** How near to a corner a click or a finger takes hold of it. */
const MOUSE_REACH_PX = 9;
const TOUCH_REACH_PX = 22;
/** Twice in one place, by hand, is within this distance. */
const SAME_PLACE_PX = 10;
const NUDGE_PX = 10;

export const reachOf = (pointerType: string): number =>
  pointerType === 'touch' ? TOUCH_REACH_PX : MOUSE_REACH_PX;

export const lonLatOf = ({ latlng }: LeafletMouseEvent): LonLat => [latlng.lng, latlng.lat];

/** Whatever has an outline under change. */
export interface OutlineEditor {
  isOpen(): boolean;
  isDrawing(): boolean;
  outline(): Outline;
  addCorner(corner: LonLat): void;
  finish(): void;
  select(index: number | null): void;
  shape(step: (outline: Outline) => Outline): void;
  drag(step: (outline: Outline) => Outline): void;
  undo(): void;
  /** What is not changed by its corners, such as an area of several parts; `null` when there is none. */
  whole(): unknown;
}

/** What hands and keys do to an outline on the map. */
export class OutlineHands {
  private grip: { index: number; moved: boolean } | null = null;
  private ignoresClick = false;

  constructor(
    private readonly stage: LeafletStage,
    private readonly editor: OutlineEditor,
  ) {
    const container = stage.map.getContainer();
    // Before Leaflet hears of it, which would otherwise move the map.
    container.addEventListener('pointerdown', (event) => this.down(event), { capture: true });
    container.addEventListener('pointermove', (event) => this.drag(event));
    container.addEventListener('pointerup', (event) => this.up(event));
    container.addEventListener('pointercancel', (event) => this.up(event));
  }

  /** Whether a corner is in the hand. */
  get isDragging(): boolean {
    return this.grip !== null;
  }

  /** A click or a tap on the map, or Enter at the cross-hair. */
  click(at: LonLat, reachPx: number): void {
    if (this.ignoresClick) {
      this.ignoresClick = false;
      return;
    }
    const { editor } = this;
    if (editor.isDrawing()) {
      this.draw(at, reachPx);
      return;
    }
    if (editor.whole()) return;
    const hit = this.hit(this.stage.windowPoint(at), reachPx);
    const { selected } = editor.outline();
    if (hit?.kind === 'corner') editor.select(hit.index === selected ? null : hit.index);
    else if (hit) editor.shape((outline) => insertCorner(outline, hit.after, at));
    else if (selected !== null) editor.shape((outline) => moveCorner(outline, selected, at));
  }

  /** @returns whether the key meant the outline */
  press(event: KeyboardEvent): boolean {
    const { editor } = this;
    const { selected, isClosed } = editor.outline();
    if (event.key === 'Backspace' || (event.key === 'z' && (event.ctrlKey || event.metaKey))) {
      editor.undo();
      return true;
    }
    if (!isClosed || editor.whole()) return false;
    if (event.key === 'PageDown' || event.key === 'PageUp') {
      this.selectNext(event.key === 'PageDown' ? 1 : -1);
      return true;
    }
    if (selected === null) return false;
    const step = ARROWS[event.key];
    if (step) {
      this.nudge(selected, step, event.shiftKey ? 1 : NUDGE_PX);
      return true;
    }
    if (event.key === 'Delete') editor.shape((outline) => removeCorner(outline, selected));
    else if (event.key === 'Escape') editor.select(null);
    else return false;
    return true;
  }

  private selectNext(step: 1 | -1): void {
    const { selected, corners } = selectNext(this.editor.outline(), step);
    this.editor.select(selected);
    const corner = selected === null ? undefined : corners[selected];
    if (corner) this.stage.bringIntoSight(corner);
  }

  private nudge(index: number, [dx, dy]: readonly [number, number], px: number): void {
    const corner = this.editor.outline().corners[index];
    if (!corner) return;
    const { x, y } = this.stage.windowPoint(corner);
    const to = this.stage.placeAt({ x: x + dx * px, y: y + dy * px });
    this.editor.shape((outline) => moveCorner(outline, index, to));
    this.stage.bringIntoSight(to);
  }

  private draw(at: LonLat, reachPx: number): void {
    const { corners } = this.editor.outline();
    const point = this.stage.windowPoint(at);
    const near = (corner: LonLat | undefined, px: number): boolean =>
      corner !== undefined && this.stage.windowPoint(corner).distanceTo(point) <= px;
    if (near(corners.at(-1), SAME_PLACE_PX) || near(corners[0], reachPx)) this.editor.finish();
    else this.editor.addCorner(at);
  }

  private hit(at: WorldPoint, reachPx: number): OutlineHit | null {
    return outlineHit(
      this.editor.outline(),
      at,
      (corner) => this.stage.windowPoint(corner),
      reachPx,
    );
  }

  private down(event: PointerEvent): void {
    this.ignoresClick = false;
    const { editor } = this;
    if (!editor.isOpen() || editor.isDrawing() || editor.whole() || event.button !== 0) return;
    const at = this.stage.pointOf(event);
    const hit = this.hit(at, reachOf(event.pointerType));
    if (!hit) return;
    if (hit.kind === 'middle') {
      editor.shape((outline) => insertCorner(outline, hit.after, this.stage.placeAt(at)));
    }
    this.grip = { index: hit.kind === 'corner' ? hit.index : hit.after + 1, moved: false };
    if (hit.kind === 'middle') this.grip.moved = true;
    this.stage.map.dragging.disable();
    this.stage.map.getContainer().setPointerCapture(event.pointerId);
  }

  private drag(event: PointerEvent): void {
    const { grip } = this;
    if (!grip) return;
    const at = this.stage.pointOf(event);
    const to = this.stage.placeAt(at);
    if (grip.moved) {
      this.editor.drag((outline) => moveCorner(outline, grip.index, to));
      return;
    }
    if (this.isStill(grip.index, at)) return;
    grip.moved = true;
    this.editor.shape((outline) => moveCorner(outline, grip.index, to));
  }

  private up(event: PointerEvent): void {
    const { grip } = this;
    if (!grip) return;
    this.grip = null;
    this.ignoresClick = true;
    this.stage.map.dragging.enable();
    this.stage.map.getContainer().releasePointerCapture(event.pointerId);
    const { selected } = this.editor.outline();
    if (!grip.moved) this.editor.select(grip.index === selected ? null : grip.index);
  }

  /** A hand that presses shakes a little; that is no drag. */
  private isStill(index: number, at: Point): boolean {
    const corner = this.editor.outline().corners[index];
    return corner !== undefined && this.stage.windowPoint(corner).distanceTo(at) < 5;
  }
}

/** Which way an arrow key goes, in the window's directions. */
export const ARROWS: Readonly<Record<string, readonly [number, number] | undefined>> = {
  ArrowLeft: [-1, 0],
  ArrowRight: [1, 0],
  ArrowUp: [0, -1],
  ArrowDown: [0, 1],
};
