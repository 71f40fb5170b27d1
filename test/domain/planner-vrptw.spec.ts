import { existsSync, readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { plan } from '@shared/domain/planner/plan';
import type { PlanProblem } from '@shared/domain/planner/problem';
import { checkPlan } from '@shared/domain/planner/check-plan';

/**
 * Best known distances of Solomon's instances (M. M. Solomon, Operations Research 35(2), 1987) for the
 * fewest vehicles. Our crew is fixed and only distance counts, so a good plan is near or below them.
 * Van capacity is no rule of ours: it is left out, which can only shorten the way.
 */
const BEST_KNOWN: Readonly<Record<string, number>> = {
  R101: 1650.8,
  R105: 1377.11,
  R201: 1252.37,
  R208: 726.75,
  C101: 828.94,
  C201: 591.56,
  RC101: 1696.95,
  RC105: 1629.44,
  RC201: 1406.91,
};

const folder = path.join(process.env['THAWLINE_TEST_DATA'] ?? '', 'vrptw');
const isThere = Boolean(process.env['THAWLINE_TEST_DATA']) && existsSync(folder);
const files = isThere ? readdirSync(folder).filter((name) => name.endsWith('.txt')) : [];

/** Distances times ten as seconds, one unit of money per second; windows as good as hard. */
function read(file: string): PlanProblem {
  const lines = readFileSync(path.join(folder, file), 'utf8').split(/\r?\n/);
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

describe('plan, on published routing instances', () => {
  if (!isThere) {
    it.skip('needs THAWLINE_TEST_DATA with a folder vrptw', () => undefined);
    return;
  }
  it.each(files)(
    'serves everybody in time in %s, within a tenth of the best known distance',
    (file) => {
      const problem = read(file);
      const result = plan(problem, { iterations: 8000, seed: 1 });
      const score = checkPlan(problem, result);
      expect(score.violations).toEqual([]);
      expect(result.unassigned).toEqual([]);
      expect(score.lateness).toBe(0);
      const distance = score.travel / 10;
      const known = BEST_KNOWN[file.replace('.txt', '')];
      if (known !== undefined) expect(distance / known).toBeLessThan(1.1);
    },
  );
});
