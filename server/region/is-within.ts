import type { LonLat } from '@shared/contract/common';

export type Box = readonly [west: number, south: number, east: number, north: number];

export const isWithin = ([lon, lat]: LonLat, [west, south, east, north]: Box): boolean =>
  lon >= west && lon <= east && lat >= south && lat <= north;
