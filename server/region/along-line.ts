import type { LonLat } from './osm-extract';

/** The place at a share, 0 to 1, of a line's length; whole 1e-7 degrees, as all places are kept. */
export function placeAlong(line: readonly LonLat[], share: number): LonLat {
  const squeeze = Math.cos(((line[0]?.[1] ?? 0) * Math.PI) / 180);
  const lengths = line
    .slice(1)
    .map(([lon, lat], i) => Math.hypot((lon - line[i]![0]) * squeeze, lat - line[i]![1]));
  let left = share * lengths.reduce((sum, length) => sum + length, 0);
  for (const [i, length] of lengths.entries()) {
    if (left <= length || i === lengths.length - 1) {
      const part = length === 0 ? 0 : Math.min(1, left / length);
      return [0, 1].map((axis) => {
        const from = line[i]![axis]!;
        return Math.round((from + (line[i + 1]![axis]! - from) * part) * 1e7) / 1e7;
      }) as [number, number];
    }
    left -= length;
  }
  return line[0]!;
}
