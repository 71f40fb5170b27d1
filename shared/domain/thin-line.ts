/** Longitude and latitude in degrees. */
type LonLat = readonly [number, number];

const METRES_PER_DEGREE = 111_195;

/** Leaves out points that lie within so many metres of the line through their neighbours (Douglas and Peucker). */
export function thinned<P extends LonLat>(line: readonly P[], metres: number): P[] {
  if (line.length < 3) return [...line];
  const squeeze = Math.cos((line[0]![1] * Math.PI) / 180);
  const limit = metres / METRES_PER_DEGREE;
  const keep = new Uint8Array(line.length);
  keep[0] = keep[line.length - 1] = 1;
  const open: [number, number][] = [[0, line.length - 1]];
  for (let span = open.pop(); span; span = open.pop()) {
    const [from, to] = span;
    let farthest = limit;
    let at = -1;
    for (let i = from + 1; i < to; i++) {
      const off = offLine(line[i]!, line[from]!, line[to]!, squeeze);
      if (off > farthest) {
        farthest = off;
        at = i;
      }
    }
    if (at < 0) continue;
    keep[at] = 1;
    open.push([from, at], [at, to]);
  }
  return line.filter((_, i) => keep[i]);
}

/** Distance of a point from a segment, in degrees of latitude. */
function offLine(p: LonLat, a: LonLat, b: LonLat, squeeze: number): number {
  const dx = (b[0] - a[0]) * squeeze;
  const dy = b[1] - a[1];
  const px = (p[0] - a[0]) * squeeze;
  const py = p[1] - a[1];
  const square = dx * dx + dy * dy;
  const share = square === 0 ? 0 : Math.min(1, Math.max(0, (px * dx + py * dy) / square));
  return Math.sqrt((px - dx * share) ** 2 + (py - dy * share) ** 2);
}
