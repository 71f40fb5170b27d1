import { chanceOf, noise1, noise2, seedOf } from './chance';
import { between, type Point } from './plane';
import { contours } from './contours';
import { distanceField, type Field } from './field';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { abs, min, max, sqrt, round } = Math;

/** Half the county's extent on the plane, in metres. */
export const HALF_WIDTH = 21_000;
export const HALF_HEIGHT = 25_000;
const CELL = 60;

export interface Terrain {
  /** Closed rings with land on the left, the OpenStreetMap rule. */
  readonly coast: readonly Point[][];
  readonly lakes: readonly Point[][];
  /** The river above the estuary: its centre line and its banks as a closed ring. */
  readonly river: readonly Point[];
  readonly riverBanks: readonly Point[];
  /** Metres to the nearest water; 0 in water. Good to about 40 m, which callers allow for. */
  clearance(p: Point): number;
  /** The middle line of the strip of land that lies before the coast, at a northing. */
  barrierAt(y: number): Point;
  /** How far inland the mainland's east shore lies at a northing, roughly. */
  readonly inlets: readonly number[];
}

interface Blob {
  readonly at: Point;
  readonly radius: number;
}

const BARRIER_REACH = 14_500;
const ESTUARY_HEAD = -3_500;
const RIVER_HEAD = 9_500;
const RIVER_HALF_WIDTH = 16;

/** The shape of the land: an island with a sound and a barrier strip in the east and an estuary in the south. */
export function makeTerrain(seed: number): Terrain {
  const coastSeed = seedOf(seed, 'coast');
  const barrierSeed = seedOf(seed, 'barrier');
  const riverSeed = seedOf(seed, 'river');
  const chance = chanceOf(seed, 'inlets');
  const inlets = [chance.between(-7_500, -5_500), chance.between(5_500, 8_000)];

  const shoreAt = (y: number): number => {
    const t = y / 20_500;
    return -2_500 + 14_500 * sqrt(max(0, 1 - t * t));
  };
  const barrierX = (y: number): number =>
    shoreAt(y * 0.82) +
    2_500 +
    700 * noise1(y / 9_000, barrierSeed) +
    130 * noise1(y / 1_900, barrierSeed + 1);
  const riverX = (y: number): number =>
    -5_200 + 1_900 * noise1(y / 6_000, riverSeed) + 640 * noise1(y / 1_700, riverSeed + 1);

  const estuaryHalfWidth = (y: number): number => {
    if (y > ESTUARY_HEAD) return 0;
    const t = (ESTUARY_HEAD - y) / 17_000;
    const ragged =
      (110 * noise1(y / 900, riverSeed + 2) + 45 * noise1(y / 310, riverSeed + 4)) * min(1, t * 3);
    // Narrower than the lattice can hold it would fall apart into ponds.
    return max(50, 40 + 1_500 * t * t + ragged);
  };

  const barrierDepth = (x: number, y: number): number => {
    const taper = min(1, (BARRIER_REACH - abs(y)) / 1_500);
    let half = (330 + 120 * noise1(y / 1_300, barrierSeed + 2)) * taper;
    for (const inlet of inlets) {
      const off = abs(y - inlet);
      if (off < 900) half = min(half, off - 420);
    }
    return half - abs(x - barrierX(y)) + 45 * noise2(x / 420, y / 420, barrierSeed + 3);
  };

  const mainlandDepth = (x: number, y: number): number => {
    const ex = (x + 2_500) / 14_500;
    const ey = y / 20_500;
    const base = (1 - ex * ex - ey * ey) * 8_000;
    if (base > 5_200 && y > ESTUARY_HEAD) return base;
    if (base < -5_200) return base;
    let depth =
      base +
      2_300 * noise2(x / 9_000, y / 9_000, coastSeed) +
      1_250 * noise2(x / 4_300, y / 4_300, coastSeed + 1) +
      620 * noise2(x / 2_000, y / 2_000, coastSeed + 2) +
      250 * noise2(x / 900, y / 900, coastSeed + 3) +
      90 * noise2(x / 380, y / 380, coastSeed + 4);
    if (abs(y) < BARRIER_REACH + 1_500) {
      const sound =
        1_250 +
        450 * noise1(y / 2_400, barrierSeed + 4) +
        120 * noise2(x / 500, y / 500, barrierSeed + 5);
      depth = min(depth, barrierX(y) - sound - x);
    }
    if (y < ESTUARY_HEAD) depth = min(depth, abs(x - riverX(y)) - estuaryHalfWidth(y));
    return depth;
  };

  const islets = isletBlobs(seed, barrierX);
  const depthOf = (x: number, y: number): number => {
    let depth = mainlandDepth(x, y);
    if (abs(y) < BARRIER_REACH && abs(x - barrierX(y)) < 1_200)
      depth = max(depth, barrierDepth(x, y));
    for (const { at, radius } of islets) {
      const dx = x - at[0];
      const dy = y - at[1];
      if (abs(dx) > 700 || abs(dy) > 700) continue;
      depth = max(
        depth,
        radius - sqrt(dx * dx + dy * dy) + 70 * noise2(x / 230, y / 230, coastSeed + 6),
      );
    }
    return depth;
  };

  const columns = round((2 * HALF_WIDTH) / CELL) + 1;
  const rows = round((2 * HALF_HEIGHT) / CELL) + 1;
  const depths = new Float64Array(columns * rows);
  for (let j = 0; j < rows; j++) {
    for (let i = 0; i < columns; i++) {
      depths[j * columns + i] = depthOf(i * CELL - HALF_WIDTH, j * CELL - HALF_HEIGHT);
    }
  }
  const field: Field = {
    columns,
    rows,
    cell: CELL,
    left: -HALF_WIDTH,
    bottom: -HALF_HEIGHT,
    values: depths,
  };
  // Specks of a few cells are noise, not islands.
  const coast = contours(field, 0, 12);

  const lakes = carveLakes(seed, field);
  const river: Point[] = [];
  for (let y = ESTUARY_HEAD - 400; y <= RIVER_HEAD; y += 60) river.push([riverX(y), y]);
  carveLine(field, river);

  const clearance = distanceField(field);
  return {
    coast,
    lakes,
    river,
    riverBanks: banks(river, RIVER_HALF_WIDTH),
    clearance,
    barrierAt: (y) => [barrierX(y), y],
    inlets,
  };
}

/** Small islands of marsh in the sound. */
function isletBlobs(seed: number, barrierX: (y: number) => number): Blob[] {
  const chance = chanceOf(seed, 'islets');
  return Array.from({ length: 14 }, () => {
    const y = chance.between(-13_000, 13_000);
    return { at: [barrierX(y) - chance.between(550, 1_150), y], radius: chance.between(60, 210) };
  });
}

/** Sets lakes into the land, and gives their shores. */
function carveLakes(seed: number, field: Field): Point[][] {
  const chance = chanceOf(seed, 'lakes');
  const noiseSeed = seedOf(seed, 'lake-shores');
  const dry = distanceField(field);
  const lakes: Blob[] = [];
  for (let tries = 0; tries < 400 && lakes.length < 7; tries++) {
    const at: Point = [chance.between(-15_000, 9_000), chance.between(-17_000, 17_000)];
    const radius = chance.between(260, 720);
    if (dry(at) < radius * 2 + 900) continue;
    if (lakes.some((lake) => abs(lake.at[0] - at[0]) + abs(lake.at[1] - at[1]) < 5_000)) continue;
    lakes.push({ at, radius });
  }
  const water: Field = { ...field, values: new Float64Array(field.values.length).fill(-1_000) };
  for (const { at, radius } of lakes) {
    for (let j = 0; j < field.rows; j++) {
      const y = field.bottom + j * field.cell;
      if (abs(y - at[1]) > radius * 2) continue;
      for (let i = 0; i < field.columns; i++) {
        const x = field.left + i * field.cell;
        if (abs(x - at[0]) > radius * 2) continue;
        const dx = x - at[0];
        const dy = (y - at[1]) * 1.35;
        const depth =
          radius -
          sqrt(dx * dx + dy * dy) +
          radius * 0.45 * noise2(x / 420, y / 420, noiseSeed) +
          50 * noise2(x / 170, y / 170, noiseSeed + 1);
        const k = j * field.columns + i;
        water.values[k] = max(water.values[k]!, depth);
        if (depth > 0) field.values[k] = min(field.values[k]!, -depth);
      }
    }
  }
  return contours(water, 0, 10);
}

/** Makes the cells along a line wet, so that whatever keeps clear of water keeps clear of the river. */
function carveLine(field: Field, line: readonly Point[]): void {
  for (let k = 1; k < line.length; k++) {
    // Half a cell at a time, so that no way leads through between two wet cells.
    for (let share = 0; share <= 1; share += 0.2) {
      const [x, y] = between(line[k - 1]!, line[k]!, share);
      const i = round((x - field.left) / field.cell);
      const j = round((y - field.bottom) / field.cell);
      field.values[j * field.columns + i] = -1;
    }
  }
}

/** The ring around a line, tapering to a point at its far end. */
function banks(line: readonly Point[], halfWidth: number): Point[] {
  const left: Point[] = [];
  const right: Point[] = [];
  line.forEach((p, i) => {
    const a = line[max(0, i - 1)]!;
    const b = line[min(line.length - 1, i + 1)]!;
    const dx = b[0] - a[0];
    const dy = b[1] - a[1];
    const length = sqrt(dx * dx + dy * dy);
    const width = halfWidth * min(1, (line.length - 1 - i) / 40 + 0.15);
    left.push([p[0] - (dy / length) * width, p[1] + (dx / length) * width]);
    right.push([p[0] + (dy / length) * width, p[1] - (dx / length) * width]);
  });
  const ring = [...left, ...right.reverse()];
  return [...ring, ring[0]!];
}
