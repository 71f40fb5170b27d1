/** Which cluster each point belongs to. */
export interface Clustering {
  /** Cluster number of each point, from 0 in order of each cluster's first point; -1 for noise. */
  readonly clusterOf: Int32Array;
  /** 1 where the point has at least `minPoints` points, itself among them, within reach. */
  readonly isCore: Uint8Array;
  readonly clusterCount: number;
}

/** Cells within two steps in each direction, but for the four corners, which are out of reach. */
const NEAR_CELLS = [-2, -1, 0, 1, 2]
  .flatMap((dx) => [-2, -1, 0, 1, 2].map((dy) => [dx, dy] as const))
  .filter(([dx, dy]) => Math.abs(dx) + Math.abs(dy) < 4);

/** Room for so many cells in each direction in one exact whole number as key. */
const AXIS = 2 ** 25;

/**
 * DBSCAN in the plane (Ester, Kriegel, Sander & Xu 1996) on a hash grid with cells of side
 * eps / √2, so that two points of one cell are always within reach: a cell with `minPoints` points
 * is all core without a single distance (Gunawan 2013). Work grows with the number of points; only
 * two crowded cells that lie barely out of reach of each other are compared point by point.
 *
 * A border point goes to its nearest core point (of two as near, to the one that comes first in the
 * order of x, then y), so the order of the input changes nothing but the numbers of the clusters.
 *
 * @param eps reach, in the unit of x and y; a point at exactly this distance is within reach
 * @param minPoints least number of points within reach, the point itself included
 */
export function gridDbscan(
  x: Float64Array,
  y: Float64Array,
  eps: number,
  minPoints: number,
): Clustering {
  if (!(eps > 0)) throw new RangeError(`A reach of ${eps} groups nothing.`);
  if (!(minPoints >= 1)) throw new RangeError(`A pocket of ${minPoints} points is none.`);
  const grid = new Grid(x, y, eps);
  const isCore = findCores(grid, minPoints);
  const parent = joinCells(grid, isCore);
  return numberClusters(grid, isCore, parent);
}

/** Points sorted into cells; a cell's points lie side by side in `members`. */
class Grid {
  readonly members: Int32Array;
  readonly cellOf: Int32Array;
  /** Cell k's members run from offset[k] to offset[k + 1]. */
  readonly offset: Int32Array;
  readonly cellCount: number;
  private readonly reachSquared: number;
  private readonly numbers = new Map<number, number>();
  private readonly keys: number[] = [];

  constructor(
    readonly x: Float64Array,
    readonly y: Float64Array,
    eps: number,
  ) {
    // A hair smaller, so that rounding never puts two points out of reach into one cell.
    const side = (eps / Math.SQRT2) * (1 - 1e-12);
    this.reachSquared = eps * eps;
    const n = x.length;
    const minX = least(x);
    const minY = least(y);
    this.cellOf = new Int32Array(n);
    for (let i = 0; i < n; i++) {
      const column = Math.floor((x[i]! - minX) / side);
      const row = Math.floor((y[i]! - minY) / side);
      if (!(column < AXIS && row < AXIS)) {
        throw new RangeError(`Point ${i} lies too far out for a reach of ${eps}.`);
      }
      const key = column * AXIS + row;
      let cell = this.numbers.get(key);
      if (cell === undefined) {
        cell = this.keys.push(key) - 1;
        this.numbers.set(key, cell);
      }
      this.cellOf[i] = cell;
    }
    this.cellCount = this.keys.length;
    this.offset = new Int32Array(this.cellCount + 1);
    for (let i = 0; i < n; i++) this.offset[this.cellOf[i]! + 1]!++;
    for (let k = 0; k < this.cellCount; k++) this.offset[k + 1]! += this.offset[k]!;
    const next = this.offset.slice();
    this.members = new Int32Array(n);
    for (let i = 0; i < n; i++) this.members[next[this.cellOf[i]!]!++] = i;
  }

  sizeOf(cell: number): number {
    return this.offset[cell + 1]! - this.offset[cell]!;
  }

  /** The cells that may hold points within reach of this cell's points, itself first. */
  near(cell: number): number[] {
    const key = this.keys[cell]!;
    const column = Math.floor(key / AXIS);
    const row = key % AXIS;
    const found = [cell];
    for (const [dx, dy] of NEAR_CELLS) {
      if ((dx === 0 && dy === 0) || row + dy < 0 || row + dy >= AXIS) continue;
      const other = this.numbers.get((column + dx) * AXIS + row + dy);
      if (other !== undefined) found.push(other);
    }
    return found;
  }

  distanceSquared(a: number, b: number): number {
    const dx = this.x[a]! - this.x[b]!;
    const dy = this.y[a]! - this.y[b]!;
    return dx * dx + dy * dy;
  }

  /** Least and greatest x, then y, of some points. */
  boxOf(points: Int32Array): readonly [number, number, number, number] {
    let [minX, maxX, minY, maxY] = [Infinity, -Infinity, Infinity, -Infinity];
    for (const point of points) {
      minX = Math.min(minX, this.x[point]!);
      maxX = Math.max(maxX, this.x[point]!);
      minY = Math.min(minY, this.y[point]!);
      maxY = Math.max(maxY, this.y[point]!);
    }
    return [minX, maxX, minY, maxY];
  }

  isNearBox(
    point: number,
    [minX, maxX, minY, maxY]: readonly [number, number, number, number],
  ): boolean {
    const dx = Math.max(0, minX - this.x[point]!, this.x[point]! - maxX);
    const dy = Math.max(0, minY - this.y[point]!, this.y[point]! - maxY);
    return dx * dx + dy * dy <= this.reachSquared;
  }

  areNear(a: number, b: number): boolean {
    return this.distanceSquared(a, b) <= this.reachSquared;
  }
}

function least(values: Float64Array): number {
  let smallest = Infinity;
  for (const value of values) {
    if (!Number.isFinite(value)) throw new RangeError(`${value} is no place.`);
    if (value < smallest) smallest = value;
  }
  return smallest;
}

function findCores(grid: Grid, minPoints: number): Uint8Array {
  const isCore = new Uint8Array(grid.x.length);
  for (let cell = 0; cell < grid.cellCount; cell++) {
    const own = grid.members.subarray(grid.offset[cell], grid.offset[cell + 1]);
    if (own.length >= minPoints) {
      for (const point of own) isCore[point] = 1;
      continue;
    }
    const near = grid.near(cell).slice(1);
    for (const point of own) {
      let count = own.length;
      for (let k = 0; k < near.length && count < minPoints; k++) {
        const end = grid.offset[near[k]! + 1]!;
        for (let m = grid.offset[near[k]!]!; m < end && count < minPoints; m++) {
          if (grid.areNear(point, grid.members[m]!)) count++;
        }
      }
      if (count >= minPoints) isCore[point] = 1;
    }
  }
  return isCore;
}

/** Joins cells whose core points reach each other; all core points of one cell always do. */
function joinCells(grid: Grid, isCore: Uint8Array): Int32Array {
  const parent = Int32Array.from({ length: grid.cellCount }, (_, cell) => cell);
  const cores = Array.from({ length: grid.cellCount }, (_, cell) =>
    grid.members
      .subarray(grid.offset[cell], grid.offset[cell + 1])
      .filter((point) => isCore[point] === 1),
  );
  for (let cell = 0; cell < grid.cellCount; cell++) {
    if (cores[cell]!.length === 0) continue;
    for (const other of grid.near(cell)) {
      if (other <= cell || cores[other]!.length === 0) continue;
      const a = rootOf(parent, cell);
      const b = rootOf(parent, other);
      if (a !== b && anyNear(grid, cores[cell]!, cores[other]!))
        parent[Math.max(a, b)] = Math.min(a, b);
    }
  }
  return parent;
}

function rootOf(parent: Int32Array, cell: number): number {
  while (parent[cell] !== cell) {
    parent[cell] = parent[parent[cell]!]!;
    cell = parent[cell]!;
  }
  return cell;
}

function anyNear(grid: Grid, some: Int32Array, others: Int32Array): boolean {
  const box = grid.boxOf(others);
  for (const a of some) {
    // Of a crowded cell only the points on the side towards the other one need a second look.
    if (!grid.isNearBox(a, box)) continue;
    for (const b of others) if (grid.areNear(a, b)) return true;
  }
  return false;
}

function numberClusters(grid: Grid, isCore: Uint8Array, parent: Int32Array): Clustering {
  const n = grid.x.length;
  const rootCell = new Int32Array(n).fill(-1);
  for (let point = 0; point < n; point++) {
    const cell = grid.cellOf[point]!;
    if (isCore[point]) rootCell[point] = rootOf(parent, cell);
    else {
      const core = nearestCore(grid, isCore, point);
      if (core >= 0) rootCell[point] = rootOf(parent, grid.cellOf[core]!);
    }
  }
  const numberOf = new Map<number, number>();
  const clusterOf = rootCell.map((root) => {
    if (root < 0) return -1;
    const known = numberOf.get(root) ?? numberOf.size;
    numberOf.set(root, known);
    return known;
  });
  return { clusterOf, isCore, clusterCount: numberOf.size };
}

function nearestCore(grid: Grid, isCore: Uint8Array, point: number): number {
  let nearest = -1;
  let least = Infinity;
  for (const cell of grid.near(grid.cellOf[point]!)) {
    for (let m = grid.offset[cell]!; m < grid.offset[cell + 1]!; m++) {
      const other = grid.members[m]!;
      if (!isCore[other] || !grid.areNear(point, other)) continue;
      const distance = grid.distanceSquared(point, other);
      if (distance < least || (distance === least && comesFirst(grid, other, nearest))) {
        least = distance;
        nearest = other;
      }
    }
  }
  return nearest;
}

function comesFirst(grid: Grid, a: number, b: number): boolean {
  return grid.x[a]! < grid.x[b]! || (grid.x[a] === grid.x[b] && grid.y[a]! < grid.y[b]!);
}
