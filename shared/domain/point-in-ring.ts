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

/** Edges for each band, about: fewer cost more bands, more cost more looks. */
const EDGES_A_BAND = 4;

/** As `isInRing`, for many points and one ring: its edges are sorted into bands of latitude once. */
export class BandedRing {
  private readonly bands: number[][] = [];
  /** The two ends of each edge: x, y, x, y. */
  private readonly edges: Float64Array;
  private readonly south: number;
  private readonly perBand: number;
  private west = Infinity;
  private east = -Infinity;

  constructor(ring: readonly (readonly [number, number])[]) {
    this.edges = new Float64Array(4 * Math.max(0, ring.length - 1));
    let [south, north] = [Infinity, -Infinity];
    for (const [x, y] of ring) {
      this.west = Math.min(this.west, x);
      this.east = Math.max(this.east, x);
      south = Math.min(south, y);
      north = Math.max(north, y);
    }
    this.south = south;
    const count = Math.max(1, Math.ceil(ring.length / EDGES_A_BAND));
    this.perBand = (north - south) / count;
    for (let i = 0; i < count; i++) this.bands.push([]);
    // In the direction of the ring, as `isInRing` reads it: rounding must fall the same way.
    for (let i = 1; i < ring.length; i++) {
      const [a, b] = [ring[i], ring[i - 1]];
      if (!a || !b) continue;
      this.edges.set([a[0], a[1], b[0], b[1]], 4 * (i - 1));
      const last = this.bandOf(Math.max(a[1], b[1]));
      for (let band = this.bandOf(Math.min(a[1], b[1])); band <= last; band++)
        this.bands[band]?.push(4 * (i - 1));
    }
  }

  contains([x, y]: readonly [number, number]): boolean {
    if (x < this.west || x > this.east || !(y >= this.south)) return false;
    const { edges } = this;
    let inside = false;
    for (const at of this.bands[this.bandOf(y)] ?? []) {
      const ay = edges[at + 1] ?? 0;
      const by = edges[at + 3] ?? 0;
      if (ay > y === by > y) continue;
      const ax = edges[at] ?? 0;
      const bx = edges[at + 2] ?? 0;
      if (x < ((bx - ax) * (y - ay)) / (by - ay) + ax) inside = !inside;
    }
    return inside;
  }

  private bandOf(y: number): number {
    const band = Math.floor((y - this.south) / this.perBand);
    return Math.min(this.bands.length - 1, Math.max(0, Number.isFinite(band) ? band : 0));
  }
}
