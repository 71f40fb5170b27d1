import type { Wish } from './country-links';
import { between, distance, lengthOf, simplified, type Point } from './plane';
import type { StreetLine } from './street-line';
import type { Terrain } from './terrain';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { min, max } = Math;

/** Nearer to water than this a road counts as a bridge, in metres. */
export const BRIDGE_CLEARANCE = 88;
/** Nearer to water than this a road that lies low is under it in a storm, in metres. */
const LOW_CLEARANCE = 230;
const FINE_STEP = 20;
const LONGEST_FORD = 240;
type Ground = 'wet' | 'low' | 'dry';

/**
 * Cuts a road where it comes to water, to ground that a storm floods, and to dry ground again:
 * bridges, fords and low stretches become lines of their own.
 *
 * @param numbers house number at each point, not yet odd or even
 */
export function linesByGround(
  wish: Wish,
  points: readonly Point[],
  numbers: readonly number[],
  terrain: Terrain,
): StreetLine[] {
  const fine = densified(points, numbers, FINE_STEP);
  const clear = fine.map(({ p }) => terrain.clearance(p));
  // A span between two points is a bridge when either end is over water.
  const isByBridge = (i: number): boolean =>
    clear.slice(max(0, i - 25), i + 25).some((metres) => metres === 0);
  const groundOf = (i: number): Ground => {
    const least = min(clear[i - 1]!, clear[i]!);
    if (least < BRIDGE_CLEARANCE) return 'wet';
    return wish.floods && least < LOW_CLEARANCE && isByBridge(i) ? 'low' : 'dry';
  };
  const lines: StreetLine[] = [];
  let from = 0;
  for (let i = 1; i < fine.length; i++) {
    const ground = groundOf(i);
    if (i < fine.length - 1 && ground === groundOf(i + 1)) continue;
    const part = fine.slice(from, i + 1);
    const kept = simplified(
      part.map(({ p }) => p),
      1.2,
    );
    const numberAt = new Map(part.map(({ p, number }) => [p, number]));
    // Back roads go through a brook; whatever is longer than its flood plain needs a bridge.
    const isFord =
      ground === 'wet' && wish.streetClass === 'unclassified' && lengthOf(kept) < LONGEST_FORD;
    const isBridge = ground === 'wet' && !isFord;
    lines.push({
      points: kept,
      streetClass: wish.streetClass,
      street: wish.street,
      part: wish.part,
      town: null,
      numbers:
        ground === 'wet' || wish.part === 'highway'
          ? null
          : kept.map((p) => numberAt.get(p) ?? 100),
      isBridge,
      ...(isFord
        ? { water: 'ford' as const }
        : ground === 'low'
          ? { water: 'floods' as const }
          : {}),
    });
    from = i;
  }
  return lines;
}

function densified(
  points: readonly Point[],
  numbers: readonly number[],
  step: number,
): { p: Point; number: number }[] {
  const result: { p: Point; number: number }[] = [{ p: points[0]!, number: numbers[0]! }];
  for (let i = 1; i < points.length; i++) {
    const a = points[i - 1]!;
    const b = points[i]!;
    const pieces = max(1, Math.ceil(distance(a, b) / step));
    for (let s = 1; s <= pieces; s++) {
      const share = s / pieces;
      result.push({
        p: s === pieces ? b : between(a, b, share),
        number: numbers[i - 1]! + (numbers[i]! - numbers[i - 1]!) * share,
      });
    }
  }
  return result;
}
