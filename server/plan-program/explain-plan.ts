import { counted, partsOf } from '@shared/domain/planner/job-parts';
import { plan } from '@shared/domain/planner/plan';
import { stopReasons } from '@shared/domain/planner/plan-summary';
import type { Plan, PlanProblem } from '@shared/domain/planner/problem';

export interface PlanReasons {
  /** Why each stop stands where it stands, by its job. */
  readonly stops: ReadonlyMap<string, string>;
  /** What would find a place for a job that is on no route; nothing listed when none of these would. */
  readonly wouldChange: ReadonlyMap<string, readonly string[]>;
}

/** Something that is given up to see which calls then find a place. */
interface Concession {
  readonly words: (job: PlanProblem['jobs'][number]) => string | null;
  readonly apply: (problem: PlanProblem) => PlanProblem;
}

const HOUR = 3600;

const CONCESSIONS: readonly Concession[] = [
  {
    words: ({ skills }) =>
      skills.length === 0
        ? null
        : `${skills.join(' and ')} among the skills of those who are there`,
    apply: (problem) => ({
      ...problem,
      jobs: problem.jobs.map((job) => ({ ...job, skills: [] })),
    }),
  },
  {
    words: ({ onlyTechnicians }) => (onlyTechnicians ? 'leave for other technicians to go' : null),
    apply: (problem) => ({
      ...problem,
      jobs: problem.jobs.map(({ onlyTechnicians: _, ...job }) => job),
    }),
  },
  {
    words: (job) => (partsOf(job).length === 0 ? null : `${partsOf(job).join(' and ')} on a van`),
    apply: (problem) => ({
      ...problem,
      jobs: problem.jobs.map(({ part: _, parts: __, ...job }) => job),
    }),
  },
  {
    words: () => 'an hour more on every shift',
    apply: (problem) => ({
      ...problem,
      technicians: problem.technicians.map((technician) => ({
        ...technician,
        shifts: technician.shifts.map((shift) => ({ ...shift, end: shift.end + HOUR })),
      })),
    }),
  },
  {
    words: ({ skills }) =>
      `one more technician${skills.length === 0 ? '' : ` with ${skills.join(' and ')}`}`,
    apply: (problem) => ({
      ...problem,
      jobs: problem.jobs.map(({ onlyTechnicians: _, ...job }) => job),
      technicians: [...problem.technicians, ...oneMore(problem)],
    }),
  },
];

/** Somebody with every skill and part who works the hours of the first technician. */
function oneMore({ jobs, technicians }: PlanProblem): PlanProblem['technicians'] {
  const [like] = technicians;
  if (!like) return [];
  return [
    {
      ...like,
      id: `one more than ${technicians.map(({ id }) => id).join()}`,
      skills: jobs.flatMap(({ skills }) => skills),
      parts: Object.fromEntries(counted(jobs.flatMap(partsOf))),
      frozen: [],
    },
  ];
}

/**
 * Reasons for a plan. What would change is found by trying it: each concession is made to the whole
 * problem, the plan is kept as it is, and whatever then finds a place is noted. The calls are tried
 * together, so that the hour which two of them need is promised to one of them only.
 */
export function explainPlan(problem: PlanProblem, result: Plan): PlanReasons {
  const left = new Set(result.unassigned.map(({ job }) => job));
  const wouldChange = new Map<string, string[]>();
  if (left.size > 0) {
    const byId = new Map(problem.jobs.map((job) => [job.id, job]));
    for (const { words, apply } of CONCESSIONS) {
      if (![...left].some((id) => words(byId.get(id)!) !== null)) continue;
      const tried = plan({ ...apply(problem), previous: result }, { iterations: 0, seed: 1 });
      for (const { job } of tried.routes.flatMap((route) => route.stops)) {
        const told = left.has(job) ? words(byId.get(job)!) : null;
        if (told !== null) wouldChange.set(job, [...(wouldChange.get(job) ?? []), told]);
      }
    }
  }
  return {
    stops: new Map([...stopReasons(problem, result)].map(([job, { words }]) => [job, words])),
    wouldChange,
  };
}
