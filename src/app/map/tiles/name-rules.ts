import { CenteredTextSymbolizer, LineLabelSymbolizer, type LabelRule } from 'protomaps-leaflet';
import { NUMBERS_MIN_ZOOM } from './map-zoom';
import type { Palette, RoadClass } from './palette';
import { isClass, isKind } from './rule-filters';
import { GROUND, NUMBERS } from './sources';

const FONT = '"IBM Plex Sans", sans-serif';

/**
 * Names in the order in which they get their room: who comes first stands. Cities, towns and villages
 * are named above the calls, which cover the tiles: see `paint-towns.ts`.
 */
export function nameRules(palette: Palette): LabelRule[] {
  const { text, quietText, waterText, halo } = palette;
  const street = streetNames(palette);
  const place = placeNames(palette);
  const rules: Omit<LabelRule, 'dataSource'>[] = [
    place(['suburb'], 11, 12, 500, text),
    place(['sea'], 10, 12, 400, waterText, 'italic'),
    place(['island', 'hamlet', 'neighbourhood', 'locality'], 13, 11, 500, quietText),
    place(['water'], 13, 11, 400, waterText, 'italic'),
    place(['hospital', 'ferry_terminal'], 14, 11, 500, text),
    street('motorway', 12, 12),
    street('primary', 13, 12),
    street('secondary', 14, 11),
    street('tertiary', 15, 11),
    street('local', 16, 11),
    place(['farm'], 15, 11, 400, quietText),
    place(['green'], 14, 11, 400, quietText, 'italic'),
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
    place(
      [
        'clinic',
        'school',
        'grocery',
        'pharmacy',
        'fire_station',
        'townhall',
        'library',
        'police',
        'marina',
        'place_of_worship',
      ],
      16,
      10,
      500,
      quietText,
    ),
  ];
  return [
    ...rules.map((rule): LabelRule => ({ ...rule, dataSource: GROUND })),
    {
      dataSource: NUMBERS,
      dataLayer: 'addresses',
      minzoom: NUMBERS_MIN_ZOOM,
      symbolizer: new CenteredTextSymbolizer({
        labelProps: ['number'],
        fill: quietText,
        stroke: halo,
        width: 1,
        font: `400 10px ${FONT}`,
      }),
    },
  ];
}

const placeNames =
  ({ halo, sea, waterText }: Palette) =>
  (
    kinds: readonly string[],
    minzoom: number,
    size: number,
    weight: number,
    fill: string,
    style = 'normal',
  ): LabelRule => ({
    dataLayer: 'places',
    minzoom,
    filter: isKind(...kinds),
    symbolizer: new CenteredTextSymbolizer({
      labelProps: ['name'],
      fill,
      stroke: fill === waterText ? sea : halo,
      width: 2,
      lineHeight: 1.2,
      maxLineChars: 16,
      font: `${style} ${weight} ${size}px ${FONT}`,
    }),
  });

const streetNames =
  ({ quietText, halo }: Palette) =>
  (roadClass: RoadClass, minzoom: number, size: number): LabelRule => ({
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
