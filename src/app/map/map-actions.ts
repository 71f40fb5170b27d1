import { inject, Injectable, signal } from '@angular/core';
import type { AreaDto, PocketDto } from '@shared/contract/areas';
import { Announce } from '../core/announce';
import { BoardStore } from '../core/board-store';
import { Theme } from '../core/theme';
import { AreaEditor } from './area-editor';
import type { LeafletStage } from './leaflet-stage';
import { readInk } from './map-ink';
import { MapPicture } from './map-picture';
import { MapPopover } from './map-popover';
import { MapScenes } from './map-scenes';
import type { MapSight } from './map-wish';

/** As in the styles: below this the panel takes the lower part of the map, else its left. */
const NARROW_PX = 560;
const PANEL_PX = 320;
/** A small outline is not blown up beyond this, unless the person is closer already. */
const MOST_OUTLINE_ZOOM = 15;

/** What can be done on the map, whether by button, key or click. */
@Injectable()
export class MapActions {
  private readonly board = inject(BoardStore);
  private readonly announce = inject(Announce);
  private readonly editor = inject(AreaEditor);
  private readonly popover = inject(MapPopover);
  private readonly scenes = inject(MapScenes);
  private readonly theme = inject(Theme);

  /** `null` until the map has a size to stand in. */
  readonly stage = signal<LeafletStage | null>(null);
  readonly picture = new MapPicture(() => readInk(this.theme));
  readonly panel = signal<'none' | 'lists' | 'legend'>('none');

  show(what: MapSight | AreaDto | PocketDto): void {
    const stage = this.stage();
    if (!stage) return;
    if (typeof what === 'object') {
      stage.showAll('shape' in what ? what.shape.flat(2) : what.hull);
    } else if (what === 'all') {
      stage.showAll(this.scenes.callPlaces());
    } else if (what === 'pocket') {
      const pocket = this.scenes.pocketOfSelection();
      if (pocket) stage.showAll(pocket.hull);
      else this.announce.say('The call is in no pocket.');
    } else {
      const call = this.board.selectedCall();
      if (call?.address.lonLat) stage.showCall(call.address.lonLat);
      else if (call) this.announce.notice(`Nobody knows yet where call ${call.number} is.`);
    }
  }

  draw(): void {
    this.panel.set('none');
    this.popover.close();
    this.editor.draw();
    this.focus();
  }

  change(area: AreaDto): void {
    this.panel.set('none');
    this.popover.close();
    this.editor.change(area);
    this.showOutline();
  }

  /** The form must not lie on what it is about. */
  showOutline(): void {
    const stage = this.stage();
    if (!stage) return;
    const { x, y } = stage.map.getSize();
    const covered = x < NARROW_PX ? { below: y * 0.55 } : { left: PANEL_PX };
    const closest = Math.max(stage.map.getZoom(), MOST_OUTLINE_ZOOM);
    stage.showAll(this.editor.ground()?.flat(2) ?? [], { ...covered, closest });
  }

  cancelArea(): void {
    this.editor.cancel();
    this.focus();
  }

  toggle(panel: 'lists' | 'legend'): void {
    this.panel.update((shown) => (shown === panel ? 'none' : panel));
  }

  /** Takes the calls of one pocket into the queue, or all of them again. */
  choosePocket({ key, name }: PocketDto): void {
    const isChosen = this.board.filter().pocketKey === key;
    this.board.filter.update((filter) => ({ ...filter, pocketKey: isChosen ? null : key }));
    this.announce.say(isChosen ? 'All calls again.' : `Only the calls of the pocket ${name}.`);
  }

  chooseTechnician(technicianId: string | null): void {
    this.scenes.chosenTechnicianId.set(technicianId);
    if (technicianId !== null) this.popover.pinTechnician(technicianId);
  }

  select(callId: string): void {
    this.board.selectedCallId.set(callId);
  }

  /** Several calls in one place: closer, they may stand apart. */
  lookCloser(): void {
    const at = this.popover.at();
    const stage = this.stage();
    if (at && stage) stage.map.setView([at[1], at[0]], stage.map.getZoom() + 2);
    this.popover.close();
  }

  cornerAtCentre(): void {
    const stage = this.stage();
    if (stage) this.editor.addCorner(stage.centre());
  }

  showCorner(index: number): void {
    const corner = this.editor.outline().corners[index];
    if (corner) this.stage()?.bringIntoSight(corner);
  }

  focus(): void {
    this.stage()?.map.getContainer().focus({ preventScroll: true });
  }
}
