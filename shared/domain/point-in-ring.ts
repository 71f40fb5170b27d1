/**
 * Whether a point lies inside a closed ring, both in degrees, by counting crossings to its east.
 * Areas are a few miles wide, so the plane is good enough. A point on the edge may fall either way.
 */
export function isInRing(
  [x, y]: readonly [number, number],
  ring: readonly (readonly [number, number])[],
): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const a = ring[i];
    const b = ring[j];
    if (!a || !b) continue;
    if (a[1] > y !== b[1] > y && x < ((b[0] - a[0]) * (y - a[1])) / (b[1] - a[1]) + a[0])
      inside = !inside;
  }
  return inside;
}
