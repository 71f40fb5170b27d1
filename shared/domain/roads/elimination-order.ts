/** Who meets whom, without directions: node v's neighbours are `to[first[v]] … to[first[v + 1] - 1]`. */
export interface Neighbours {
  readonly first: Int32Array;
  readonly to: Int32Array;
}

export interface Elimination {
  /** Nodes in the order in which they are taken out: the first has the lowest rank. */
  readonly order: Int32Array;
  /** For each node, by its own number, whom it still met when it was taken out. */
  readonly above: readonly Int32Array[];
}

/**
 * Takes the nodes of a graph out one by one, the one with the fewest neighbours first, and joins those
 * neighbours with each other so that no way is lost (minimum degree ordering; Tinney & Walker, "Direct
 * solutions of sparse network equations by optimally ordered triangular factorization", Proc. IEEE 55,
 * 1967). Among equals the one over the lowest hill of nodes taken out before, so that the hierarchy stays
 * flat, then the one with the lower number: the same graph always gives the same order.
 */
export function eliminate({ first, to }: Neighbours): Elimination {
  const count = first.length - 1;
  const above: Int32Array[] = Array.from({ length: count }, (_, v) =>
    withoutTwins(to.slice(first[v], first[v + 1]).sort(), v),
  );
  const height = new Int32Array(count);
  const queue = new LeastFirst(count);
  const priority = (v: number): number =>
    above[v]!.length * HEIGHTS + Math.min(height[v]!, HEIGHTS - 1);
  for (let v = 0; v < count; v++) queue.set(v, priority(v));
  const order = new Int32Array(count);
  const join = joiner(count);
  for (let rank = 0; rank < count; rank++) {
    const v = queue.take();
    order[rank] = v;
    const met = above[v]!;
    for (const x of met) {
      above[x] = join(above[x]!, met, x, v);
      if (height[x]! <= height[v]!) height[x] = height[v]! + 1;
      queue.set(x, priority(x));
    }
  }
  return { order, above };
}

/** More than any hierarchy of roads is high. */
const HEIGHTS = 4096;

function withoutTwins(sorted: Int32Array, own: number): Int32Array {
  return sorted.filter((x, i) => x !== own && (i === 0 || sorted[i - 1] !== x));
}

/** Makes the union of two sorted lists without two of their members. */
function joiner(
  most: number,
): (a: Int32Array, b: Int32Array, without: number, orThis: number) => Int32Array {
  const scratch = new Int32Array(most + 1);
  return (a, b, without, orThis) => {
    let length = 0;
    let i = 0;
    let j = 0;
    const [inA, inB] = [a.length, b.length];
    while (i < inA && j < inB) {
      const x = a[i]!;
      const y = b[j]!;
      const next = x < y ? x : y;
      if (x <= y) i++;
      if (y <= x) j++;
      if (next !== without && next !== orThis) scratch[length++] = next;
    }
    for (; i < inA; i++) if (a[i] !== without && a[i] !== orThis) scratch[length++] = a[i]!;
    for (; j < inB; j++) if (b[j] !== without && b[j] !== orThis) scratch[length++] = b[j]!;
    return scratch.slice(0, length);
  };
}

/** A binary heap of numbers 0 to n - 1 that knows where each one is, so that priorities can change. */
class LeastFirst {
  private readonly heap: Int32Array;
  private readonly place: Int32Array;
  private readonly key: Float64Array;
  private size = 0;

  constructor(count: number) {
    this.heap = new Int32Array(count);
    this.place = new Int32Array(count).fill(-1);
    this.key = new Float64Array(count);
  }

  set(item: number, key: number): void {
    const known = this.place[item]!;
    const before = this.key[item]!;
    this.key[item] = key;
    if (known < 0) this.rise(this.size++, item);
    else if (key < before) this.rise(known, item);
    else this.sink(known, item);
  }

  take(): number {
    const least = this.heap[0]!;
    this.place[least] = -1;
    const last = this.heap[--this.size]!;
    if (this.size > 0) this.sink(0, last);
    return least;
  }

  private isBefore(a: number, b: number): boolean {
    const difference = this.key[a]! - this.key[b]!;
    return difference < 0 || (difference === 0 && a < b);
  }

  private rise(at: number, item: number): void {
    let place = at;
    while (place > 0) {
      const parent = (place - 1) >> 1;
      const above = this.heap[parent]!;
      if (!this.isBefore(item, above)) break;
      this.put(place, above);
      place = parent;
    }
    this.put(place, item);
  }

  private sink(at: number, item: number): void {
    let place = at;
    for (;;) {
      let child = place * 2 + 1;
      if (child >= this.size) break;
      if (child + 1 < this.size && this.isBefore(this.heap[child + 1]!, this.heap[child]!)) child++;
      if (!this.isBefore(this.heap[child]!, item)) break;
      this.put(place, this.heap[child]!);
      place = child;
    }
    this.put(place, item);
  }

  private put(place: number, item: number): void {
    this.heap[place] = item;
    this.place[item] = place;
  }
}
