import { driveTable, driveTableBack, type DriveTable, type Scratch } from './drive-table';
import type { TimedRoads } from './quickest-way';
import type { RoadPoint } from './road-ends';

/** Points whose drives are kept: a storm's calls and technicians. 2 × 4 bytes for each pair. */
const MOST_KEPT = 2048;
const UNKNOWN = -1;

/**
 * Drives between points that come back again and again. A table is put together from what is known, and
 * only the rows and columns of points that are new are worked out.
 */
export class KeptDrives {
  private readonly slotOf = new Map<string, number>();
  private readonly keyOf: string[] = [];
  private readonly usedAt: number[] = [];
  private capacity = 0;
  private ms: Int32Array = new Int32Array(0);
  private dm: Int32Array = new Int32Array(0);
  private asked = 0;

  constructor(
    private readonly roads: TimedRoads,
    private readonly scratch: Scratch,
    private readonly most = MOST_KEPT,
  ) {}

  /** Drives between every two of the points, row-major. */
  table(points: readonly RoadPoint[]): DriveTable {
    const byKey = new Map(points.map((point) => [`${point.segment} ${point.share}`, point]));
    if (byKey.size > this.most) return driveTable(this.roads, points, points, this.scratch);
    this.asked++;
    const distinct = [...byKey].map(([key, point]) => ({ slot: this.slotFor(key), point }));
    this.fill(distinct);
    return this.picked(points.map((p) => this.slotOf.get(`${p.segment} ${p.share}`)!));
  }

  private fill(wanted: readonly { readonly slot: number; readonly point: RoadPoint }[]): void {
    const { ms, dm, capacity } = this;
    const isNew = ({ slot }: { readonly slot: number }): boolean =>
      ms[slot * capacity + slot] === UNKNOWN;
    const strangers = this.strangers(wanted.filter((one) => !isNew(one)));
    const rows = [...wanted.filter(isNew), ...strangers];
    if (rows.length === 0) return;
    const [from, to] = [rows.map(({ point }) => point), wanted.map(({ point }) => point)];
    const there = driveTable(this.roads, from, to, this.scratch);
    const isWhole = rows.length === wanted.length;
    const back = isWhole ? null : driveTableBack(this.roads, from, to, this.scratch);
    rows.forEach(({ slot }, row) => {
      wanted.forEach((other, column) => {
        const cell = row * wanted.length + column;
        ms[slot * capacity + other.slot] = there.ms[cell]!;
        dm[slot * capacity + other.slot] = there.dm[cell]!;
        if (!back) return;
        ms[other.slot * capacity + slot] = back.ms[cell]!;
        dm[other.slot * capacity + slot] = back.dm[cell]!;
      });
    });
  }

  /** Points that are known, each, and were never asked for together with another one of them. */
  private strangers<Kept extends { readonly slot: number }>(known: readonly Kept[]): Kept[] {
    const { ms, capacity } = this;
    const slots = Int32Array.from(known, ({ slot }) => slot);
    return known.filter(({ slot }, i) => {
      const row = slot * capacity;
      for (let j = i + 1; j < slots.length; j++) if (ms[row + slots[j]!] === UNKNOWN) return true;
      return false;
    });
  }

  private picked(slots: readonly number[]): DriveTable {
    const { ms, dm, capacity } = this;
    const size = slots.length;
    const table = { ms: new Int32Array(size * size), dm: new Int32Array(size * size) };
    for (let row = 0; row < size; row++) {
      const from = slots[row]! * capacity;
      for (let column = 0; column < size; column++) {
        table.ms[row * size + column] = ms[from + slots[column]!]!;
        table.dm[row * size + column] = dm[from + slots[column]!]!;
      }
    }
    return table;
  }

  private slotFor(key: string): number {
    const known = this.slotOf.get(key);
    const slot = known ?? this.freeSlot();
    this.usedAt[slot] = this.asked;
    if (known !== undefined) return slot;
    this.slotOf.set(key, slot);
    this.keyOf[slot] = key;
    for (let other = 0; other < this.capacity; other++) {
      this.ms[slot * this.capacity + other] = UNKNOWN;
      this.ms[other * this.capacity + slot] = UNKNOWN;
    }
    return slot;
  }

  private freeSlot(): number {
    if (this.slotOf.size < this.most) {
      if (this.slotOf.size === this.capacity) this.grow();
      return this.slotOf.size;
    }
    // The one that has not been asked for the longest.
    let oldest = 0;
    for (let slot = 1; slot < this.most; slot++)
      if (this.usedAt[slot]! < this.usedAt[oldest]!) oldest = slot;
    this.slotOf.delete(this.keyOf[oldest]!);
    return oldest;
  }

  private grow(): void {
    const capacity = Math.min(this.most, Math.max(64, this.capacity * 2));
    const larger = (old: Int32Array): Int32Array => {
      const fresh = new Int32Array(capacity * capacity).fill(UNKNOWN);
      for (let row = 0; row < this.capacity; row++)
        fresh.set(old.subarray(row * this.capacity, (row + 1) * this.capacity), row * capacity);
      return fresh;
    };
    this.ms = larger(this.ms);
    this.dm = larger(this.dm);
    this.capacity = capacity;
  }
}
