import { distance, type Point } from './plane';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { floor, ceil, max } = Math;

/** The importance of a street, the way OpenStreetMap's `highway` tag tells it. */
export type StreetClass = 'primary' | 'secondary' | 'tertiary' | 'unclassified' | 'residential';

/** A street as it was drawn, before crossings are worked out. */
export interface StreetLine {
  readonly points: readonly Point[];
  readonly streetClass: StreetClass;
  /** Lines of one street share a key; the name is given per key. */
  readonly street: string;
  /** How names are chosen: by the part that the street plays. */
  readonly part: StreetPart;
  /** The town it was laid out with; null for roads between towns. */
  readonly town: number | null;
  /** House number at each point, not yet made odd or even; null where nobody lives along it. */
  readonly numbers: readonly number[] | null;
  readonly isBridge: boolean;
  /** What water does to it, if anything: it is driven through, or it rises over the road in a storm. */
  readonly water?: 'ford' | 'floods';
}

export type StreetPart =
  'along' | 'across' | 'waterfront' | 'loop' | 'cul' | 'highway' | 'road' | 'rural' | 'lane';

/** House numbers that grow by one per `metresEach` from `first` on. */
export function numbersAlong(
  points: readonly Point[],
  first: number,
  metresEach: number,
): number[] {
  const numbers: number[] = [];
  let way = 0;
  points.forEach((p, i) => {
    if (i > 0) way += distance(points[i - 1]!, p);
    numbers.push(first + way / metresEach);
  });
  return numbers;
}

const SAMPLE_METRES = 18;
const BUCKET_METRES = 90;

/** Knows how far the nearest street is. Streets are kept as points every 18 m. */
export class StreetSpace {
  private readonly buckets = new Map<number, { p: Point; street: string }[]>();

  add(points: readonly Point[], street: string): void {
    for (let i = 1; i < points.length; i++) {
      const a = points[i - 1]!;
      const b = points[i]!;
      const steps = max(1, ceil(distance(a, b) / SAMPLE_METRES));
      for (let s = i === 1 ? 0 : 1; s <= steps; s++) {
        const share = s / steps;
        this.put([a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share], street);
      }
    }
  }

  /** The nearest known point of a street within `reach` metres, if any. */
  nearest(
    p: Point,
    reach: number,
    wanted: (street: string) => boolean = () => true,
  ): { p: Point; street: string; metres: number } | null {
    const span = ceil(reach / BUCKET_METRES);
    const i0 = floor(p[0] / BUCKET_METRES);
    const j0 = floor(p[1] / BUCKET_METRES);
    let best: { p: Point; street: string; metres: number } | null = null;
    let bestMetres = reach;
    for (let j = j0 - span; j <= j0 + span; j++) {
      for (let i = i0 - span; i <= i0 + span; i++) {
        for (const known of this.buckets.get(bucket(i, j)) ?? []) {
          const metres = distance(p, known.p);
          if (metres < bestMetres && wanted(known.street)) {
            bestMetres = metres;
            best = { ...known, metres };
          }
        }
      }
    }
    return best;
  }

  private put(p: Point, street: string): void {
    const key = bucket(floor(p[0] / BUCKET_METRES), floor(p[1] / BUCKET_METRES));
    const found = this.buckets.get(key);
    if (found) found.push({ p, street });
    else this.buckets.set(key, [{ p, street }]);
  }
}

const bucket = (i: number, j: number): number => (i + 4_096) * 16_384 + (j + 4_096);
