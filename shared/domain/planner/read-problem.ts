import {
  DEFAULT_WEIGHTS,
  NO_WAY_SECONDS,
  type PlanBreak,
  type PlanJob,
  type PlanProblem,
  type PlanShift,
  type PlanTechnician,
  type PlanWeights,
  type PreviousPlan,
} from './problem';
import { Field } from './read-fields';

/** A problem as a program sends it, with what it asks of the search. */
export interface SentProblem {
  readonly problem: PlanProblem;
  readonly budgetMs?: number;
  readonly seed?: number;
}

/**
 * Reads a planning problem that another program has made (problem.ts says what the fields mean).
 *
 * Fields that it does not know are passed over, and null counts as left out. The first field that
 * is not as it must be is refused by its path.
 *
 * @param sent what JSON.parse has made of it; the matrix may also be a flat table of numbers of 0 or more
 * @throws UnreadableField
 */
export function readProblem(sent: unknown): SentProblem {
  const root = new Field(sent);
  if (root.at('version').number() !== 1) root.at('version').refuse('must be 1');
  const locations = root.at('locations').count();
  const matrix = readMatrix(root.at('matrix'), locations);
  const place = (field: Field): number => readPlace(field, locations);
  const problem: PlanProblem = {
    version: 1,
    now: root.at('now').number(),
    locations,
    matrix,
    jobs: root.at('jobs').list((job) => readJob(job, place)),
    technicians: root.at('technicians').list((technician) => readTechnician(technician, place)),
    ...given('shop', root, (shop) => ({
      loc: place(shop.at('loc')),
      seconds: shop.at('seconds').amount(),
      ...given('parts', shop, (parts) => parts.numbers((count) => count.count())),
    })),
    ...given('previous', root, readPrevious),
    ...given('weights', root, readWeights),
  };
  refuseRepeats(root.at('jobs'), problem.jobs);
  refuseRepeats(root.at('technicians'), problem.technicians);
  checkFrozen(root.at('technicians'), problem);
  return {
    problem,
    ...given('budgetMs', root, (budget) => budget.amount()),
    ...given('seed', root, (seed) => seed.number()),
  };
}

/** An optional field under its own name, or nothing. */
function given<Name extends string, Value>(
  name: Name,
  parent: Field,
  read: (field: Field) => Value,
): Partial<Record<Name, Value>> {
  const value = parent.at(name).optional(read);
  return value === undefined ? {} : ({ [name]: value } as Partial<Record<Name, Value>>);
}

/** Flat or by rows; null stands for "no way leads there". Plain loops, for there may be millions. */
function readMatrix(field: Field, locations: number): Float64Array {
  const { value } = field;
  if (value instanceof Float64Array && value.length === locations ** 2) return value;
  if (!Array.isArray(value)) return field.refuse('must be a list');
  const flat = new Float64Array(locations * locations);
  const isByRows = Array.isArray(value[0]);
  if (value.length !== (isByRows ? locations : flat.length)) {
    const rows = locations === 1 ? '1 row' : `${locations} rows`;
    field.refuse(`must hold ${rows} or ${flat.length} numbers, not ${value.length}`);
  }
  for (let row = 0; row < locations; row++) {
    const cells: unknown = isByRows ? value[row] : value;
    if (!Array.isArray(cells)) return new Field(cells, `matrix[${row}]`).refuse('must be a list');
    if (isByRows && cells.length !== locations) {
      new Field(cells, `matrix[${row}]`).refuse(
        `must hold ${locations} numbers, not ${cells.length}`,
      );
    }
    const offset = isByRows ? 0 : row * locations;
    for (let column = 0; column < locations; column++) {
      const seconds: unknown = cells[offset + column];
      if (typeof seconds === 'number' && seconds >= 0 && seconds < Infinity) {
        flat[row * locations + column] = seconds;
      } else if (seconds === null) {
        flat[row * locations + column] = NO_WAY_SECONDS;
      } else {
        const path = isByRows ? `matrix[${row}][${column}]` : `matrix[${offset + column}]`;
        new Field(seconds, path).refuse('must be a number of seconds, 0 or more, or null');
      }
    }
  }
  return flat;
}

function readPlace(field: Field, locations: number): number {
  const place = field.count();
  if (place >= locations) {
    field.refuse(`must be a place of the matrix, from 0 to ${locations - 1}, not ${place}`);
  }
  return place;
}

function readJob(job: Field, place: (field: Field) => number): PlanJob {
  return {
    id: job.at('id').name(),
    loc: place(job.at('loc')),
    service: job.at('service').amount(),
    ...given('serviceBy', job, (by) => by.numbers((seconds) => seconds.amount())),
    calledAt: job.at('calledAt').number(),
    ...given('earliest', job, (earliest) => earliest.number()),
    weight: job.at('weight').amount(),
    skills: job.at('skills').list((skill) => skill.text()),
    ...given('part', job, (part) => part.name()),
    ...given('parts', job, (parts) => parts.list((part) => part.name())),
    ...given('windows', job, (windows) => windows.list(readWindow)),
    ...given('deadlines', job, (deadlines) =>
      deadlines.list((one) => ({ at: one.at('at').number(), value: one.at('value').amount() })),
    ),
    ...given('onlyTechnicians', job, (only) => only.list((id) => id.text())),
  };
}

function readWindow(window: Field): readonly [from: number, to: number] {
  const [from, to, ...rest] = window.list((moment) => moment.number());
  if (from === undefined || to === undefined || rest.length > 0) {
    return window.refuse('must hold two numbers');
  }
  if (to < from) window.refuse('must not end before it begins');
  return [from, to];
}

function readTechnician(technician: Field, place: (field: Field) => number): PlanTechnician {
  const frozen = technician.at('frozen').list((id) => id.text());
  const shifts = technician.at('shifts').list((shift) => readShift(shift, place));
  if (frozen.length > 0 && shifts.length === 0) {
    technician.at('shifts').refuse('must hold a shift, for there are accepted stops');
  }
  return {
    id: technician.at('id').name(),
    home: place(technician.at('home')),
    at: place(technician.at('at')),
    availableAt: technician.at('availableAt').number(),
    skills: technician.at('skills').list((skill) => skill.text()),
    parts: technician.at('parts').numbers((count) => count.count()),
    shifts,
    frozen,
  };
}

function readShift(shift: Field, place: (field: Field) => number): PlanShift {
  const start = shift.at('start').number();
  const end = shift.at('end').number();
  if (end < start) shift.at('end').refuse('must not lie before the start');
  return {
    start,
    end,
    ...given('from', shift, place),
    ...given('to', shift, place),
    ...given('breaks', shift, (breaks) => breaks.list(readBreak)),
  };
}

function readBreak(pause: Field): PlanBreak {
  const from = pause.at('from').number();
  const to = pause.at('to').number();
  if (to < from) pause.at('to').refuse('must not lie before `from`');
  return { from, to, seconds: pause.at('seconds').amount() };
}

function readPrevious(previous: Field): PreviousPlan {
  return {
    routes: previous.at('routes').list((route) => ({
      technician: route.at('technician').text(),
      shift: route.at('shift').count(),
      stops: route.at('stops').list((stop) => ({
        job: stop.at('job').text(),
        start: stop.at('start').number(),
      })),
    })),
  };
}

function readWeights(weights: Field): Partial<PlanWeights> {
  const names = Object.keys(DEFAULT_WEIGHTS) as (keyof PlanWeights)[];
  return Object.assign(
    {},
    ...names.map((name) => given(name, weights, (weight) => weight.amount())),
  ) as Partial<PlanWeights>;
}

function refuseRepeats(list: Field, named: readonly { readonly id: string }[]): void {
  const seen = new Map<string, number>();
  named.forEach(({ id }, index) => {
    const first = seen.get(id);
    if (first !== undefined) {
      new Field(id, `${list.path}[${index}].id`).refuse(
        `must differ from ${list.path}[${first}].id`,
      );
    }
    seen.set(id, index);
  });
}

function checkFrozen(list: Field, { jobs, technicians }: PlanProblem): void {
  const known = new Set(jobs.map(({ id }) => id));
  const accepted = new Set<string>();
  technicians.forEach(({ frozen }, index) => {
    frozen.forEach((id, position) => {
      const field = new Field(id, `${list.path}[${index}].frozen[${position}]`);
      if (!known.has(id)) field.refuse('must be the id of a job');
      if (accepted.has(id)) field.refuse('must not be accepted twice');
      accepted.add(id);
    });
  });
}
