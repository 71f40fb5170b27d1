import type { AreaShape } from '@shared/contract/areas';
import { EMPTY_OUTLINE, MOST_CORNERS, type Outline, outlineOf, ringOf } from './outline';

/**
 * The ground of an outage area while somebody makes or changes it: an outline whose corners can be
 * moved, or, from feeders and files, a shape of several parts or many points that is taken as a whole.
 */
export interface AreaGround {
  readonly outline: Outline;
  /** Stands in place of the outline. */
  readonly whole: AreaShape | null;
}

export const NO_GROUND: AreaGround = { outline: EMPTY_OUTLINE, whole: null };

/** One ring that is not too long can be changed corner by corner. */
export function groundOf(shape: AreaShape): AreaGround {
  const [ring] = shape[0] ?? [];
  const isOneRing = shape.length === 1 && shape[0]?.length === 1;
  return ring && isOneRing && ring.length - 1 <= MOST_CORNERS
    ? { outline: outlineOf(ring), whole: null }
    : { outline: EMPTY_OUTLINE, whole: shape };
}

/** As the contract wants it; `null` as long as it encloses nothing. */
export function shapeOf({ outline, whole }: AreaGround): AreaShape | null {
  if (whole) return whole;
  const ring = ringOf(outline);
  return ring && [[ring]];
}

/** Rounding moves a corner by less than a hand's breadth. */
export function isSameShape(a: AreaShape | null, b: AreaShape): boolean {
  const rings = a?.flat();
  const others = b.flat();
  return (
    rings !== undefined &&
    a?.length === b.length &&
    rings.length === others.length &&
    rings.every((ring, i) => isSameRing(ring, others[i] ?? []))
  );
}

const isSameRing = (a: AreaShape[number][number], b: AreaShape[number][number]): boolean =>
  a.length === b.length &&
  a.every(([lon, lat], i) => {
    const [otherLon = NaN, otherLat = NaN] = b[i] ?? [];
    return Math.abs(lon - otherLon) < 2e-6 && Math.abs(lat - otherLat) < 2e-6;
  });

/** "2 parts, 1 hole, 310 points": what cannot be seen in a list of corners. */
export function shapeWords(shape: AreaShape): string {
  const holes = shape.reduce((sum, rings) => sum + rings.length - 1, 0);
  const points = shape.flat().reduce((sum, ring) => sum + ring.length - 1, 0);
  return [
    shape.length === 1 ? '1 part' : `${shape.length} parts`,
    ...(holes === 0 ? [] : [holes === 1 ? '1 hole' : `${holes} holes`]),
    `${points} points`,
  ].join(', ');
}
