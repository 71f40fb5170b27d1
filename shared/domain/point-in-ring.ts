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
  west = Infinity;
  east = -Infinity;
  south = Infinity;
  north = -Infinity;
  /** The two ends of each edge: x, y, x, y. */
  private readonly edges: Float64Array;
  /** Where the edges of each band begin in `inBand`; one more than there are bands. */
  private readonly bandStart: Int32Array;
  /** Where the edges of one band after the other lie in `edges`. */
  private readonly inBand: Int32Array;
  private readonly bands: number;
  private readonly bandsPerDegree: number;

  constructor(ring: readonly (readonly [number, number])[]) {
    for (const [x, y] of ring) {
      if (x < this.west) this.west = x;
      if (x > this.east) this.east = x;
      if (y < this.south) this.south = y;
      if (y > this.north) this.north = y;
    }
    const count = Math.max(0, ring.length - 1);
    this.bands = Math.max(1, Math.ceil(ring.length / EDGES_A_BAND));
    this.bandsPerDegree = this.north > this.south ? this.bands / (this.north - this.south) : 0;
    this.edges = new Float64Array(4 * count);
    this.bandStart = new Int32Array(this.bands + 1);
    const first = new Int32Array(count);
    const last = new Int32Array(count);
    // In the direction of the ring, as `isInRing` reads it: rounding must fall the same way.
    for (let i = 0; i < count; i++) {
      const a = ring[i + 1]!;
      const b = ring[i]!;
      this.edges[4 * i] = a[0];
      this.edges[4 * i + 1] = a[1];
      this.edges[4 * i + 2] = b[0];
      this.edges[4 * i + 3] = b[1];
      const low = this.bandOf(a[1] < b[1] ? a[1] : b[1]);
      const high = this.bandOf(a[1] < b[1] ? b[1] : a[1]);
      first[i] = low;
      last[i] = high;
      for (let band = low; band <= high; band++) this.bandStart[band + 1]!++;
    }
    for (let band = 0; band < this.bands; band++)
      this.bandStart[band + 1]! += this.bandStart[band]!;
    this.inBand = new Int32Array(this.bandStart[this.bands]!);
    const next = this.bandStart.slice();
    for (let i = 0; i < count; i++)
      for (let band = first[i]!; band <= last[i]!; band++) this.inBand[next[band]!++] = 4 * i;
  }

  contains(x: number, y: number): boolean {
    if (!(x >= this.west && x <= this.east && y >= this.south && y <= this.north)) return false;
    const { edges, inBand } = this;
    const band = this.bandOf(y);
    const end = this.bandStart[band + 1]!;
    let inside = false;
    for (let i = this.bandStart[band]!; i < end; i++) {
      const at = inBand[i]!;
      const ay = edges[at + 1]!;
      const by = edges[at + 3]!;
      if (ay > y === by > y) continue;
      const ax = edges[at]!;
      if (x < ((edges[at + 2]! - ax) * (y - ay)) / (by - ay) + ax) inside = !inside;
    }
    return inside;
  }

  private bandOf(y: number): number {
    const band = Math.floor((y - this.south) * this.bandsPerDegree);
    return band < this.bands ? band : this.bands - 1;
  }
}
