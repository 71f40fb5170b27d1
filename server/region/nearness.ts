import { isInShape, type OutageRing, type OutageShape } from '@shared/domain/outage-shape';
import type { LonLat } from './osm-extract';

/** Tells how far a place is from where callers are expected. */
export interface Nearness {
  /** 0 inside. */
  metresTo(at: LonLat): number;
}

const METRES_PER_DEGREE = 111_195;

/** Metres between two places a county apart at most, where a degree of longitude is this much of one of latitude. */
export function metresBetween(a: LonLat, b: LonLat, squeeze: number): number {
  return Math.hypot((a[0] - b[0]) * squeeze, a[1] - b[1]) * METRES_PER_DEGREE;
}

/** Nearness to some ground: inside counts 0, outside the way to the box around the nearest part. */
export function nearAreas(shapes: readonly OutageShape[]): Nearness | null {
  const parts = shapes.flat().filter(([outer]) => outer !== undefined && outer.length > 0);
  if (parts.length === 0) return null;
  const squeeze = Math.cos(((parts[0]![0]![0]?.[1] ?? 0) * Math.PI) / 180);
  const boxes = parts.map((part) => ({ part: [part], ...boxOf(part[0]!) }));
  return {
    metresTo: ([lon, lat]) => {
      let least = Infinity;
      for (const { part, west, east, south, north } of boxes) {
        const dx = Math.max(0, west - lon, lon - east) * squeeze;
        const dy = Math.max(0, south - lat, lat - north);
        if (dx === 0 && dy === 0) {
          if (isInShape([lon, lat], part)) return 0;
          // In the box and outside the outline: near, and after what is inside.
          least = Math.min(least, 1);
        } else least = Math.min(least, Math.hypot(dx, dy) * METRES_PER_DEGREE);
      }
      return least;
    },
  };
}

function boxOf(ring: OutageRing): { west: number; east: number; south: number; north: number } {
  const box = { west: Infinity, east: -Infinity, south: Infinity, north: -Infinity };
  for (const [lon, lat] of ring) {
    box.west = Math.min(box.west, lon);
    box.east = Math.max(box.east, lon);
    box.south = Math.min(box.south, lat);
    box.north = Math.max(box.north, lat);
  }
  return box;
}
