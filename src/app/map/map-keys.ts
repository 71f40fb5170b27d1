import { type DestroyRef, inject, Injectable } from '@angular/core';
import { Keys } from '../core/keys';
import { AreaEditor } from './area-editor';
import { MapActions } from './map-actions';
import { MapHands } from './map-hands';
import { MAP_LAYERS, MapLayers } from './map-layers';
import { MapPopover } from './map-popover';
import { PinTool } from './pin-tool';
import { StormRoadEditor } from './storm-road-editor';

/** The keys of the map, wherever the hands are on its screen. */
@Injectable()
export class MapKeys {
  private readonly keys = inject(Keys);
  private readonly actions = inject(MapActions);
  private readonly editor = inject(AreaEditor);
  private readonly hands = inject(MapHands);
  private readonly layers = inject(MapLayers);
  private readonly pin = inject(PinTool);
  private readonly popover = inject(MapPopover);
  private readonly roadEditor = inject(StormRoadEditor);

  register(isInSight: () => boolean, until: DestroyRef): void {
    const { actions } = this;
    const action = (keys: string, does: string, run: () => void) => ({
      keys,
      does,
      scope: 'Map',
      when: isInSight,
      run,
    });
    this.keys.register(
      [
        action('a', 'Draw an outage area', () => actions.draw()),
        action('z f', 'Make an outage area of feeders', () => actions.pickFeeders()),
        action('z i', 'Take outage areas from a file', () => actions.importFile()),
        action('b', 'Close a road, or say that it is flooded or slow', () => actions.closeRoad()),
        action('z a', 'Show all calls', () => actions.show('all')),
        action('z s', 'Show the selected call', () => actions.show('selected-call')),
        action('z p', 'Show the pocket of the selected call', () => actions.show('pocket')),
        ...MAP_LAYERS.map(({ layer, name, key }) =>
          action(`l ${key}`, `Show or hide ${name.toLowerCase()}`, () => this.layers.toggle(layer)),
        ),
        {
          ...action('Escape', 'Leave the pin, the drawing or what is shown', () => this.stepBack()),
          inFields: true,
          when: () => isInSight() && this.canStepBack(),
        },
      ],
      until,
    );
  }

  private canStepBack(): boolean {
    return this.hands.hasTool() || this.popover.at() !== null || this.actions.panel() !== 'none';
  }

  private stepBack(): void {
    const { actions } = this;
    if (this.pin.isOn()) this.pin.cancel();
    else if (this.editor.isOpen()) actions.cancelArea();
    else if (this.roadEditor.isOpen()) actions.cancelRoad();
    else if (this.popover.at() !== null) this.popover.close();
    else if (actions.panel() === 'file') actions.closeFile();
    else actions.panel.set('none');
  }
}
