import { computed, inject, Injectable, signal } from '@angular/core';
import type { AreaDto, PocketDto } from '@shared/contract/areas';
import type { StormRoadDto } from '@shared/contract/storm-roads';
import type { LonLat } from '@shared/contract/common';
import { Announce } from '../core/announce';
import { BoardStore } from '../core/board-store';
import { Theme } from '../core/theme';
import { AreaEditor } from './area-editor';
import { FeederPick } from './feeder-pick';
import { FileImport } from './file-import';
import type { Covered, LeafletStage } from './leaflet-stage';
import { readInk } from './map-ink';
import { MapPicture } from './map-picture';
import { MapPopover } from './map-popover';
import { MapScenes } from './map-scenes';
import type { MapSight } from './map-wish';
import { StormRoadEditor } from './storm-road-editor';

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
  private readonly feeders = inject(FeederPick);
  private readonly files = inject(FileImport);
  private readonly roadEditor = inject(StormRoadEditor);
  private readonly popover = inject(MapPopover);
  private readonly scenes = inject(MapScenes);
  private readonly theme = inject(Theme);

  /** `null` until the map has a size to stand in. */
  readonly stage = signal<LeafletStage | null>(null);
  /** Moves with the map. */
  readonly sight = signal<{ readonly lat: number; readonly zoom: number } | null>(null);
  readonly picture = new MapPicture(() => readInk(this.theme));
  readonly panel = signal<'none' | 'lists' | 'legend' | 'file'>('none');
  /** Whether anything lies over a part of the map. */
  readonly hasPanel = computed(
    () =>
      this.panel() !== 'none' ||
      // While an outline is drawn its form is small.
      (this.editor.isOpen() && !this.editor.isDrawing()) ||
      this.roadEditor.isOpen() ||
      this.feeders.isOn(),
  );

  showRoad({ shape }: StormRoadDto): void {
    this.stage()?.showAll(shape.type === 'line' ? shape.points : shape.ring);
  }

  show(what: MapSight | AreaDto | PocketDto): void {
    const stage = this.stage();
    if (!stage) return;
    if (typeof what === 'object') {
      stage.showAll('shape' in what ? what.shape.flat(2) : what.hull);
    } else if (what === 'all') {
      stage.showAll(this.scenes.callPlaces(), {
        covered: this.hasPanel() ? coveredIn(stage) : {},
      });
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
    this.roadEditor.cancel();
    this.feeders.stop();
    this.editor.draw();
    this.focus();
  }

  takeWay(way: 'draw' | 'feeders' | 'file'): void {
    if (way === 'draw') this.draw();
    else if (way === 'feeders') this.pickFeeders();
    else this.importFile();
  }

  pickFeeders(): void {
    this.panel.set('none');
    this.popover.close();
    this.roadEditor.cancel();
    this.feeders.start();
  }

  importFile(): void {
    this.popover.close();
    this.feeders.stop();
    if (this.editor.isOpen()) this.editor.cancel();
    this.roadEditor.cancel();
    this.files.clear();
    this.panel.set('file');
  }

  /** The panel stays beside what was read. */
  showFile(): void {
    this.showBeside(this.files.rows().flatMap(({ area }) => area.shape.flat(2)));
  }

  closeFile(): void {
    this.files.clear();
    this.panel.set('none');
    this.focus();
  }

  closeRoad(): void {
    this.panel.set('none');
    this.popover.close();
    if (this.editor.isOpen()) this.editor.cancel();
    this.feeders.stop();
    this.roadEditor.draw();
    this.focus();
  }

  changeRoad(road: StormRoadDto): void {
    this.panel.set('none');
    this.popover.close();
    if (this.editor.isOpen()) this.editor.cancel();
    this.feeders.stop();
    this.roadEditor.change(road);
    this.showRoad(road);
  }

  cancelRoad(): void {
    this.roadEditor.cancel();
    this.focus();
  }

  pickAtCentre(): void {
    const stage = this.stage();
    if (!stage) return;
    if (this.roadEditor.drawsArea()) this.roadEditor.addCorner(stage.centre());
    else void this.roadEditor.pick(stage.centre());
  }

  change(area: AreaDto): void {
    this.panel.set('none');
    this.popover.close();
    this.roadEditor.cancel();
    this.feeders.stop();
    this.editor.change(area);
    this.showOutline();
  }

  /** The form must not lie on what it is about. */
  showOutline(): void {
    this.showBeside(this.editor.ground()?.flat(2) ?? []);
  }

  private showBeside(places: readonly LonLat[]): void {
    const stage = this.stage();
    if (!stage) return;
    const closest = Math.max(stage.map.getZoom(), MOST_OUTLINE_ZOOM);
    stage.showAll(places, { covered: coveredIn(stage), closest });
  }

  /** After a panel has opened or closed, what was shown as a whole is shown in the part that is free. */
  fitBesidePanel(isOpen: boolean): void {
    const stage = this.stage();
    stage?.fitAgain(isOpen ? coveredIn(stage) : {});
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

/** What a panel covers of the map. */
function coveredIn(stage: LeafletStage): Covered {
  const { x, y } = stage.map.getSize();
  return x < NARROW_PX ? { below: y * 0.55 } : { left: PANEL_PX };
}
