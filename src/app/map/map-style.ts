import {
  CenteredTextSymbolizer,
  linear,
  LineLabelSymbolizer,
  LineSymbolizer,
  type Feature,
  type LabelRule,
  type PaintRule,
  PolygonSymbolizer,
} from 'protomaps-leaflet';

export type MapTheme = 'light' | 'dark';

/** What a map layer is drawn with. Set all of it at once when the theme changes. */
export interface MapStyle {
  readonly backgroundColor: string;
  readonly paintRules: PaintRule[];
  readonly labelRules: LabelRule[];
  /** For the layer of house numbers, which lies above and has no ground of its own. */
  readonly addressLabelRules: LabelRule[];
}

/** Below this zoom the tiles hold nothing; the map should not zoom out further. */
export const MAP_MIN_ZOOM = 9;
export const MAP_MAX_ZOOM = 19;
/** House numbers are asked for and shown from here on. */
export const ADDRESS_MIN_ZOOM = 17;

/**
 * The map is the ground for thousands of marks, so it stays quiet: two tones of land and water,
 * streets as strokes of one slate hue that weigh as much as the street does, words in the same hue.
 */
interface Palette {
  readonly sea: string;
  readonly land: string;
  readonly green: string;
  readonly wood: string;
  readonly building: string;
  readonly bridgeEdge: string;
  readonly roads: Readonly<Record<RoadClass, string>>;
  readonly text: string;
  readonly quietText: string;
  readonly waterText: string;
  readonly halo: string;
}

type RoadClass = 'motorway' | 'primary' | 'secondary' | 'tertiary' | 'local' | 'service';

const PALETTES: Readonly<Record<MapTheme, Palette>> = {
  light: {
    sea: '#d3dfe4',
    land: '#f4f3ee',
    green: '#e5eadc',
    wood: '#e2e8db',
    building: '#e6e3db',
    bridgeEdge: '#93a1a9',
    roads: {
      motorway: '#a3b1b9',
      primary: '#b0bcc3',
      secondary: '#bfc9ce',
      tertiary: '#cdd5d8',
      local: '#dce1e2',
      service: '#e4e7e7',
    },
    text: '#35454e',
    quietText: '#586871',
    waterText: '#4f7185',
    halo: '#f4f3ee',
  },
  dark: {
    sea: '#11191e',
    land: '#1d262b',
    green: '#1f2c2a',
    wood: '#1e2a29',
    building: '#242e33',
    bridgeEdge: '#60727d',
    roads: {
      motorway: '#566872',
      primary: '#4c5d67',
      secondary: '#42525b',
      tertiary: '#394850',
      local: '#2f3c43',
      service: '#2a363c',
    },
    text: '#c3ced3',
    quietText: '#93a2aa',
    waterText: '#6f97ad',
    halo: '#1a2227',
  },
};

const FONT = '"IBM Plex Sans", sans-serif';
const TEXT_FONTS = [
  `400 12px ${FONT}`,
  `italic 400 12px ${FONT}`,
  `500 12px ${FONT}`,
  `600 14px ${FONT}`,
];

/** Waits for the fonts of the labels: drawn earlier, they would be measured with another font. */
export async function loadMapFonts(): Promise<void> {
  await Promise.all(TEXT_FONTS.map((font) => document.fonts.load(font)));
}

/** @param hasCoastline whether the region's ground is sea with land drawn on it */
export function mapStyle(theme: MapTheme, hasCoastline: boolean): MapStyle {
  const palette = PALETTES[theme];
  return {
    backgroundColor: hasCoastline ? palette.sea : palette.land,
    paintRules: [...groundRules(palette), ...roadRules(palette)],
    labelRules: labelRules(palette),
    addressLabelRules: [
      {
        dataLayer: 'addresses',
        minzoom: ADDRESS_MIN_ZOOM,
        symbolizer: new CenteredTextSymbolizer({
          labelProps: ['number'],
          fill: palette.quietText,
          stroke: palette.halo,
          width: 1,
          font: `400 10px ${FONT}`,
        }),
      },
    ],
  };
}

const isKind =
  (...kinds: readonly string[]) =>
  (_zoom: number, { props }: Feature): boolean =>
    kinds.some((kind) => kind === props['kind']);

const isClass =
  (roadClass: RoadClass) =>
  (_zoom: number, { props }: Feature): boolean =>
    props['class'] === roadClass;

const isBridge =
  (roadClass: RoadClass) =>
  (_zoom: number, { props }: Feature): boolean =>
    props['class'] === roadClass && props['bridge'] === 'yes';

function groundRules({ land, green, wood, sea, building }: Palette): PaintRule[] {
  return [
    { dataLayer: 'land', symbolizer: new PolygonSymbolizer({ fill: land }) },
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
    { dataLayer: 'water', symbolizer: new PolygonSymbolizer({ fill: sea }) },
    {
      dataLayer: 'waterways',
      symbolizer: new LineSymbolizer({
        color: sea,
        width: linear([
          [10, 0.8],
          [14, 2],
          [17, 6],
        ]),
        lineCap: 'round',
      }),
    },
    { dataLayer: 'buildings', minzoom: 16, symbolizer: new PolygonSymbolizer({ fill: building }) },
  ];
}

/** Display zoom and width in pixels. Below the first stop a street is not drawn. */
const WIDTHS: Readonly<Record<RoadClass, number[][]>> = {
  motorway: [
    [9, 1.4],
    [12, 2.6],
    [14, 4.5],
    [16, 11],
    [18, 24],
  ],
  primary: [
    [9, 1.2],
    [12, 2.2],
    [14, 4],
    [16, 10],
    [18, 22],
  ],
  secondary: [
    [9, 0.7],
    [12, 1.6],
    [14, 3.2],
    [16, 8.5],
    [18, 20],
  ],
  tertiary: [
    [10, 0.6],
    [13, 1.3],
    [14, 2.4],
    [16, 7.5],
    [18, 18],
  ],
  local: [
    [11, 0.4],
    [13, 0.9],
    [14, 1.6],
    [16, 6],
    [18, 16],
  ],
  service: [
    [14, 0.5],
    [16, 2.5],
    [18, 8],
  ],
};

/** From the least street to the greatest, so that the greater lies on top. */
const DRAWN: readonly RoadClass[] = [
  'service',
  'local',
  'tertiary',
  'secondary',
  'primary',
  'motorway',
];

function roadRules({ roads, bridgeEdge }: Palette): PaintRule[] {
  const rules: PaintRule[] = [];
  for (const roadClass of DRAWN) {
    const stops = WIDTHS[roadClass];
    const width = linear(stops);
    const minzoom = stops[0]![0]!;
    rules.push({
      dataLayer: 'roads',
      minzoom: Math.max(14, minzoom),
      filter: isBridge(roadClass),
      symbolizer: new LineSymbolizer({
        color: bridgeEdge,
        width: (zoom) => width(zoom) + 2,
        lineCap: 'butt',
        lineJoin: 'round',
      }),
    });
    rules.push({
      dataLayer: 'roads',
      minzoom,
      filter: isClass(roadClass),
      symbolizer: new LineSymbolizer({
        color: roads[roadClass],
        width,
        lineCap: 'round',
        lineJoin: 'round',
      }),
    });
  }
  return rules;
}

function labelRules({ text, quietText, waterText, halo, sea }: Palette): LabelRule[] {
  const place = (
    size: number,
    weight: number,
    fill: string,
    style = 'normal',
  ): CenteredTextSymbolizer =>
    new CenteredTextSymbolizer({
      labelProps: ['name'],
      fill,
      stroke: fill === waterText ? sea : halo,
      width: 2,
      lineHeight: 1.2,
      maxLineChars: 16,
      font: `${style} ${weight} ${size}px ${FONT}`,
    });
  const street = (size: number, minzoom: number, roadClass: RoadClass): LabelRule => ({
    dataLayer: 'roads',
    minzoom,
    filter: isClass(roadClass),
    symbolizer: new LineLabelSymbolizer({
      labelProps: ['name'],
      fill: quietText,
      stroke: halo,
      width: 2,
      font: `400 ${size}px ${FONT}`,
      repeatDistance: 320,
      maxLabelChars: 40,
    }),
  });
  return [
    { dataLayer: 'places', filter: isKind('city'), symbolizer: place(16, 600, text) },
    { dataLayer: 'places', minzoom: 10, filter: isKind('town'), symbolizer: place(13, 600, text) },
    {
      dataLayer: 'places',
      minzoom: 11,
      filter: isKind('village', 'suburb'),
      symbolizer: place(12, 500, text),
    },
    {
      dataLayer: 'places',
      minzoom: 10,
      filter: isKind('sea'),
      symbolizer: place(12, 400, waterText, 'italic'),
    },
    {
      dataLayer: 'places',
      minzoom: 13,
      filter: isKind('hamlet', 'neighbourhood', 'locality'),
      symbolizer: place(11, 500, quietText),
    },
    {
      dataLayer: 'places',
      minzoom: 13,
      filter: isKind('water'),
      symbolizer: place(11, 400, waterText, 'italic'),
    },
    {
      dataLayer: 'places',
      minzoom: 14,
      filter: isKind('hospital'),
      symbolizer: place(11, 500, text),
    },
    street(12, 12, 'motorway'),
    street(12, 13, 'primary'),
    street(11, 14, 'secondary'),
    street(11, 15, 'tertiary'),
    street(11, 16, 'local'),
    {
      dataLayer: 'places',
      minzoom: 14,
      filter: isKind('green'),
      symbolizer: place(11, 400, quietText, 'italic'),
    },
    {
      dataLayer: 'waterways',
      minzoom: 13,
      filter: isKind('river', 'canal'),
      symbolizer: new LineLabelSymbolizer({
        labelProps: ['name'],
        fill: waterText,
        stroke: halo,
        width: 1,
        font: `italic 400 11px ${FONT}`,
        repeatDistance: 500,
      }),
    },
    {
      dataLayer: 'places',
      minzoom: 16,
      filter: isKind(
        'clinic',
        'school',
        'grocery',
        'pharmacy',
        'fire_station',
        'townhall',
        'library',
        'police',
        'marina',
      ),
      symbolizer: place(10, 500, quietText),
    },
  ];
}
