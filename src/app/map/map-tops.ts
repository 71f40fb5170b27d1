import { computed, inject, Injectable } from '@angular/core';
import type { LonLat } from '@shared/contract/common';
import { AreaEditor } from './area-editor';
import { MapActions } from './map-actions';
import { MapHands } from './map-hands';
import type { MapTop } from './map-picture';
import { MapScenes } from './map-scenes';
import { PinTool } from './pin-tool';
import { StormRoadEditor } from './storm-road-editor';

/** What moves with the pointer and the cross-hair, and what is being drawn. */
@Injectable()
export class MapTops {
  private readonly actions = inject(MapActions);
  private readonly editor = inject(AreaEditor);
  private readonly hands = inject(MapHands);
  private readonly pin = inject(PinTool);
  private readonly roadEditor = inject(StormRoadEditor);
  private readonly scenes = inject(MapScenes);

  readonly top = computed((): MapTop => ({
    selected: this.scenes.selectedMark(),
    hovered: this.scenes.hoveredMark(),
    outline: this.outline(),
    grounds: this.scenes.grounds(),
    feeders: this.scenes.feeders(),
    nextCorner: this.nextCorner(),
    pin: this.pin.placed(),
    stretch: this.stretch(),
  }));

  private outline() {
    if (this.editor.isOpen()) return this.editor.outline();
    const { roadEditor } = this;
    return roadEditor.isOpen() && roadEditor.drawsArea() ? roadEditor.outline() : null;
  }

  private stretch() {
    const { roadEditor } = this;
    if (!roadEditor.isOpen() || roadEditor.drawsArea()) return null;
    return { line: roadEditor.line() ?? [], picks: roadEditor.picks() };
  }

  private nextCorner(): LonLat | null {
    const stage = this.actions.stage();
    if (!(this.editor.isDrawing() || this.roadEditor.isDrawing()) || !stage) return null;
    const pointer = this.hands.pointerAt();
    if (pointer) return pointer;
    // The middle of the window moves with the map.
    this.actions.sight();
    return stage.centre();
  }
}
