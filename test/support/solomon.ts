import { existsSync, readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import type { PlanProblem } from '@shared/domain/planner/problem';

/**
 * Shortest distances that our own runs have found for Solomon's instances (M. M. Solomon, Operations
 * Research 35(2), 1987) with any number of vehicles and without their capacity, which is no rule of
 * ours: the best of all runs of 1 s to 40 s of processor time while the search was worked on. They are no optima, and
 * a plan may be shorter.
 */
export const SHORTEST_FOUND: Readonly<Record<string, number>> = {
  R101: 1642.88,
  R105: 1360.79,
  R201: 1150.31,
  R208: 706.72,
  C101: 828.94,
  C201: 591.56,
  RC101: 1618.14,
  RC105: 1518.58,
  RC201: 1266.12,
};

const folder = path.join(process.env['THAWLINE_TEST_DATA'] ?? '', 'vrptw');

/** Names of the instances in the folder of test data; none when there is no such folder. */
export function solomonNames(): string[] {
  if (!process.env['THAWLINE_TEST_DATA'] || !existsSync(folder)) return [];
  return readdirSync(folder)
    .filter((name) => name.endsWith('.txt'))
    .map((name) => name.replace('.txt', ''));
}

/** Distances times ten as seconds, one unit of money per second; windows as good as hard. */
export function solomonProblem(name: string): PlanProblem {
  const lines = readFileSync(path.join(folder, `${name}.txt`), 'utf8').split(/\r?\n/);
  const rows = lines
    .map((line) => line.trim().split(/\s+/).map(Number))
    .filter((row) => row.length === 7 && row.every(Number.isFinite));
  const vehicles = Number(lines[4]?.trim().split(/\s+/)[0]);
  const places = rows.map(([, x, y]) => [x!, y!] as const);
  const matrix = places.flatMap(([x, y]) =>
    places.map(([px, py]) => 10 * Math.hypot(x - px, y - py)),
  );
  const [, , , , opens, closes] = rows[0]!;
  return {
    version: 1,
    now: 0,
    locations: places.length,
    matrix,
    weights: {
      travelPerHour: 3600,
      waitPerHour: 0,
      lateFixed: 1e5,
      latePerHour: 3.6e6,
      maxOvertime: 0,
      unservedBase: 1e6,
    },
    technicians: Array.from({ length: vehicles }, (_, index) => ({
      id: `v${index}`,
      home: 0,
      at: 0,
      availableAt: 0,
      skills: [],
      parts: {},
      frozen: [],
      shifts: [{ start: opens! * 10, end: closes! * 10 }],
    })),
    jobs: rows.slice(1).map(([id, , , , ready, due, service]) => ({
      id: String(id),
      loc: id!,
      service: service! * 10,
      calledAt: 0,
      weight: 1,
      skills: [],
      windows: [[ready! * 10, due! * 10] as const],
    })),
  };
}
