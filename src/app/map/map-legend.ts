import { ChangeDetectionStrategy, Component, output } from '@angular/core';
import type { StormRoadKind } from '@shared/domain/roads/conditions';
import { type LegendKey, LegendKeys } from './legend-keys';
import { drawMark, type MarkLook } from './mark-sprites';
import { paintSign } from './storm-road-signs';
import type { StormRoadTense } from './storm-road-words';

const callKey = (
  words: string,
  kind: MarkLook['kind'],
  press: MarkLook['press'],
  more: Partial<MarkLook> = {},
): LegendKey => ({
  words,
  draw: (ctx, ink) => {
    // A mark may have a foot: it stands a little higher than its middle.
    ctx.translate(0, -1);
    drawMark(ctx, { kind, press, isOnRoute: false, hasDanger: false, ...more }, ink);
  },
});

const CALL_KEYS: readonly LegendKey[] = [
  callKey('Second outline: the next is lost within the hour', 'freezer', 'now'),
  callKey('Filled, warm: within four hours, or medicine at risk', 'freezer', 'soon'),
  callKey('Filled, cold: later', 'freezer', 'later'),
  callKey('Hollow: nothing left to save', 'freezer', 'none'),
  callKey('F, round: fresh food', 'fresh-food', 'later'),
  callKey('Z, six sides: freezer', 'freezer', 'later'),
  callKey('M, on its tip: medicine', 'medicine', 'later'),
  callKey('C, square: commercial stock', 'commercial-stock', 'later'),
  callKey('With a foot: on a technician’s route', 'fresh-food', 'soon', { isOnRoute: true }),
  callKey('With a triangle: somebody may be in danger', 'fresh-food', 'soon', { hasDanger: true }),
];

const stormRoadKey = (words: string, kind: StormRoadKind, tense: StormRoadTense): LegendKey => ({
  words,
  draw: (ctx, ink) => paintSign(ctx, { x: 0, y: 0 }, { kind, speedShare: 0.4 }, tense, ink),
});

const STORM_ROAD_KEYS: readonly LegendKey[] = [
  stormRoadKey('A bar, crosses along the road: closed', 'closed', 'now'),
  stormRoadKey('Waves, a double line: flooded', 'flooded', 'now'),
  stormRoadKey('A number, dots: slow; percent of the usual speed', 'slow', 'now'),
  stormRoadKey('Hollow, broken line: begins later, or is over', 'closed', 'later'),
  stormRoadKey('A question mark: reported by a technician, not confirmed', 'flooded', 'reported'),
];

/** What the marks of the map mean. */
@Component({
  selector: 'thaw-map-legend',
  imports: [LegendKeys],
  templateUrl: './map-legend.html',
  styleUrls: ['./map-panel.scss', './map-legend.scss'],
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class MapLegend {
  readonly closed = output();
  protected readonly calls = CALL_KEYS;
  protected readonly stormRoads = STORM_ROAD_KEYS;
}
