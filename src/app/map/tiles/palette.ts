export type MapTheme = 'light' | 'dark';

export type RoadClass = 'motorway' | 'primary' | 'secondary' | 'tertiary' | 'local' | 'service';

/**
 * The map is the ground for thousands of marks, so it stays quiet: two tones of land and water,
 * streets as strokes of one slate hue that weigh as much as the street does, words in the same hue.
 */
export interface Palette {
  readonly sea: string;
  readonly land: string;
  readonly shore: string;
  readonly green: string;
  readonly wood: string;
  readonly building: string;
  readonly bridgeEdge: string;
  readonly roads: Readonly<Record<RoadClass, string>>;
  readonly feeder: string;
  readonly text: string;
  readonly quietText: string;
  readonly waterText: string;
  readonly halo: string;
}

const PALETTES: Readonly<Record<MapTheme, Palette>> = {
  light: {
    sea: '#d3dfe4',
    land: '#f4f3ee',
    shore: '#b9cad2',
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
    feeder: '#8a7f9c',
    text: '#35454e',
    quietText: '#586871',
    waterText: '#4f7185',
    halo: '#f4f3ee',
  },
  dark: {
    sea: '#11191e',
    land: '#1d262b',
    shore: '#2c3b44',
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
    feeder: '#8d84a6',
    text: '#c3ced3',
    quietText: '#93a2aa',
    waterText: '#6f97ad',
    halo: '#1a2227',
  },
};

export const paletteOf = (theme: MapTheme): Palette => PALETTES[theme];

/**
 * What lies where there is no tile, or before it has come.
 *
 * @param hasCoast whether the region's ground is sea with land drawn on it
 */
export const groundColor = (theme: MapTheme, hasCoast: boolean): string =>
  hasCoast ? PALETTES[theme].sea : PALETTES[theme].land;
