import { answerProblem } from './answer-problem';

/** Milliseconds: by then the search runs at several times its first speed. */
const WARM_UP_MS = 250;
/** So many that the opening of large problems is seen too. */
const CALLS = 240;
const TECHNICIANS = 20;
const HOUR = 3600;

/**
 * Plans a made-up problem before the first one comes in, so that the compiler of the language has seen the
 * search at work and the first plan, of a stream or of the server, is as good as the later ones.
 */
export function warmUp(): void {
  answerProblem(
    JSON.stringify(madeUpProblem()),
    { seconds: WARM_UP_MS / 1000, explain: false },
    performance.now(),
  );
}

/** Calls on a grid with all that a call may have. */
function madeUpProblem(): object {
  const places = Array.from(
    { length: CALLS },
    (_, index) => [index % 9, (index * 7) % 11] as const,
  );
  return {
    version: 1,
    now: 0,
    locations: places.length,
    matrix: places.map(([x, y]) =>
      places.map(([u, v]) => Math.round(3000 * Math.hypot(x - u, y - v)) / 10),
    ),
    jobs: places.map((_, index) => ({
      id: `call-${index}`,
      loc: index,
      service: 1200 + 60 * (index % 30),
      calledAt: -HOUR * (index % 5),
      weight: 1 + (index % 2),
      skills: index % 7 === 0 ? ['sealed-system'] : [],
      part: index % 6 === 0 ? 'relay' : undefined,
      windows: index % 8 === 0 ? [[HOUR * (index % 6), HOUR * (2 + (index % 6))]] : undefined,
      deadlines: [
        { at: 600 * (index % 40), value: 100 + index },
        { at: 1500 * (index % 40), value: 200 },
      ],
    })),
    technicians: Array.from({ length: TECHNICIANS }, (_, index) => ({
      id: `technician-${index}`,
      home: index,
      at: index * 3,
      availableAt: 0,
      skills: index % 2 === 0 ? ['sealed-system'] : [],
      parts: { relay: 3 },
      shifts: [{ start: 0, end: 9 * HOUR }],
      frozen: index % 3 === 0 ? [`call-${index}`] : [],
    })),
  };
}
