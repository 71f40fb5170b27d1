import {
  type LabelRule,
  linear,
  LineSymbolizer,
  type PaintRule,
  PolygonSymbolizer,
} from 'protomaps-leaflet';
import { feederRules } from './feeder-rules';
import { nameRules } from './name-rules';
import { type MapTheme, type Palette, paletteOf } from './palette';
import { roadRules } from './road-rules';
import { isKind } from './rule-filters';
import { GROUND } from './sources';

/** What the tiles are drawn with. */
export interface MapStyle {
  readonly paintRules: PaintRule[];
  readonly labelRules: LabelRule[];
}

export function mapStyle(theme: MapTheme, hasFeeders: boolean): MapStyle {
  const palette = paletteOf(theme);
  const rules = [
    ...groundRules(palette),
    ...roadRules(palette),
    ...(hasFeeders ? feederRules(palette) : []),
  ];
  return {
    paintRules: rules.map((rule) => ({ ...rule, dataSource: GROUND })),
    labelRules: nameRules(palette),
  };
}

function groundRules({ land, shore, green, wood, sea, building }: Palette): PaintRule[] {
  const line = { stroke: shore, width: 1 };
  const stream = linear([
    [10, 0.8],
    [14, 2],
    [17, 6],
  ]);
  return [
    { dataLayer: 'land', symbolizer: new PolygonSymbolizer({ fill: land, ...line }) },
    {
      dataLayer: 'green',
      symbolizer: new PolygonSymbolizer({ fill: wood }),
      filter: isKind('wood', 'wetland', 'beach'),
    },
    {
      dataLayer: 'green',
      symbolizer: new PolygonSymbolizer({ fill: green }),
      filter: isKind('park', 'reserve'),
    },
    { dataLayer: 'water', symbolizer: new PolygonSymbolizer({ fill: sea, ...line }) },
    {
      dataLayer: 'waterways',
      symbolizer: new LineSymbolizer({ color: sea, width: stream, lineCap: 'round' }),
    },
    { dataLayer: 'buildings', minzoom: 16, symbolizer: new PolygonSymbolizer({ fill: building }) },
  ];
}
