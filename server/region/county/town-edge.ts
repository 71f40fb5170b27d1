import { simplified, type Point } from './plane';
import { numbersAlong, type StreetLine } from './street-line';
import type { Terrain } from './terrain';
import type { Town } from './towns';

/** An end of a main street, with a point further out that may lie in the water. */
export interface Gate {
  readonly at: Point;
  readonly outside: Point;
  readonly isDry: boolean;
}

/** Both ends of both main streets. */
export function gatesOf(
  town: Town,
  lines: readonly StreetLine[],
  place: (u: number, v: number) => Point,
  terrain: Terrain,
): Gate[] {
  const ends: Point[] = [];
  for (const kind of [`${town.index}/a0`, `${town.index}/x0`]) {
    const points = lines
      .filter(
        (line) => line.street.startsWith(kind) && /^[+\-/]|^$/.test(line.street.slice(kind.length)),
      )
      .flatMap((line) => line.points);
    const isAlong = kind.includes('a');
    const far = (p: Point): number => {
      const dx = p[0] - town.at[0];
      const dy = p[1] - town.at[1];
      return isAlong
        ? dx * town.along[0] + dy * town.along[1]
        : dy * town.along[0] - dx * town.along[1];
    };
    const sorted = [...points].sort((a, b) => far(a) - far(b));
    const first = sorted[0];
    const last = sorted[sorted.length - 1];
    if (first && last) ends.push(first, last);
  }
  const middle = place(0, 0);
  return ends.map((at) => {
    const dx = at[0] - middle[0];
    const dy = at[1] - middle[1];
    const length = Math.max(1, Math.sqrt(dx * dx + dy * dy));
    const outside: Point = [at[0] + (dx / length) * 330, at[1] + (dy / length) * 330];
    return { at, outside, isDry: terrain.clearance(outside) > 190 };
  });
}

/** The street along the shore, where the town reaches it: pieces of the line of equal distance to water. */
export function waterfront(town: Town, shoreLines: readonly Point[][]): StreetLine[] {
  const lines: StreetLine[] = [];
  let piece: Point[] = [];
  const flush = (): void => {
    if (piece.length > 8) {
      const points = simplified(piece, 2);
      const number = lines.length;
      lines.push({
        points,
        streetClass: 'tertiary',
        street: `${town.index}/w${number}`,
        part: 'waterfront',
        town: town.index,
        numbers: numbersAlong(points, 100, 2.2),
        isBridge: false,
      });
    }
    piece = [];
  };
  for (const ring of shoreLines) {
    for (const p of ring) {
      const dx = p[0] - town.at[0];
      const dy = p[1] - town.at[1];
      if (dx * dx + dy * dy < town.radius * town.radius * 0.95) piece.push(p);
      else flush();
    }
    flush();
  }
  return lines;
}
