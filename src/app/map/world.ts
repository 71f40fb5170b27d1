import type { LonLat } from '@shared/contract/common';

/**
 * A point of the web's Mercator map as shares of the whole world's width and height, from 0 at the
 * north-west corner to 1. A zoom step doubles everything, so that a mark is projected once and then
 * only multiplied.
 */
export interface WorldPoint {
  readonly x: number;
  readonly y: number;
}

/** Width of the whole world at zoom 0, in CSS pixels; the convention of tiled maps. */
const WORLD_PX = 256;

export function toWorld([lon, lat]: readonly [number, number]): WorldPoint {
  const sine = Math.sin((lat * Math.PI) / 180);
  return {
    x: lon / 360 + 0.5,
    y: 0.5 - Math.log((1 + sine) / (1 - sine)) / (4 * Math.PI),
  };
}

export function toLonLat({ x, y }: WorldPoint): LonLat {
  const lat = (360 / Math.PI) * Math.atan(Math.exp((0.5 - y) * 2 * Math.PI)) - 90;
  return [(x - 0.5) * 360, lat];
}

/** What a canvas shows: which part of the world, how large. */
export interface View {
  readonly zoom: number;
  /** CSS pixels for the whole world's width at this zoom. */
  readonly scale: number;
  /** The canvas's top left corner in pixels of the whole world. */
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
  /** How far the canvas reaches beyond each edge of the window. */
  readonly margin: number;
}

export const scaleAt = (zoom: number): number => WORLD_PX * 2 ** zoom;

export const onScreen = ({ scale, left, top }: View, { x, y }: WorldPoint): WorldPoint => ({
  x: x * scale - left,
  y: y * scale - top,
});

export const offScreen = ({ scale, left, top }: View, { x, y }: WorldPoint): WorldPoint => ({
  x: (x + left) / scale,
  y: (y + top) / scale,
});

/** Whether a point of the canvas lies on it, or at most `margin` pixels beside it. */
export const isInView = ({ width, height }: View, { x, y }: WorldPoint, margin = 0): boolean =>
  x >= -margin && y >= -margin && x <= width + margin && y <= height + margin;

const EQUATOR_METRES = 40_075_016.686;

/** Metres on the ground for one CSS pixel. */
export const metresPerPixel = (lat: number, zoom: number): number =>
  (EQUATOR_METRES * Math.cos((lat * Math.PI) / 180)) / scaleAt(zoom);
