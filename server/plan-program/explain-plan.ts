import { explainUnplanned, type Relaxation } from '@shared/domain/planner/explain-unplanned';
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

/** Calls that the time does not reach keep the planner's own reason alone. */
const MOST_MS = 2000;

/** Reasons for a plan, in words. */
export function explainPlan(problem: PlanProblem, result: Plan): PlanReasons {
  const until = performance.now() + MOST_MS;
  const wouldChange = new Map<string, string[]>();
  const tell = (job: string, words: string): void => {
    wouldChange.set(job, [...(wouldChange.get(job) ?? []), words]);
  };
  const tried = explainUnplanned(problem, result, () => performance.now() > until);
  for (const { job, helps } of tried) for (const help of helps) tell(job, inWords(help));
  for (const [job, words] of servedByOneMore(problem, result)) tell(job, words);
  return {
    stops: new Map([...stopReasons(problem, result)].map(([job, { words }]) => [job, words])),
    wouldChange,
  };
}

function inWords({ kind, technician, start, skills, parts, overtimeMinutes }: Relaxation): string {
  const then = `${technician} would begin at ${Math.round(start)}`;
  switch (kind) {
    case 'skill':
      return `${(skills ?? []).join(' and ')} for ${technician}: ${then}`;
    case 'part':
      return `${(parts ?? []).join(' and ')} on the van of ${technician}: ${then}`;
    case 'overtime':
      return `overtime for ${technician}, ${overtimeMinutes} min in all: ${then}`;
    case 'declined':
      return `leave for ${technician} to go: ${then}`;
  }
}

/**
 * The calls that one technician more could serve, with every skill and part and the hours of the first. They
 * are tried together, so that the hour which two of them need is promised to one of them only.
 */
function servedByOneMore(problem: PlanProblem, result: Plan): [job: string, words: string][] {
  const left = new Set(result.unassigned.map(({ job }) => job));
  const [like] = problem.technicians;
  if (left.size === 0 || !like) return [];
  const { jobs, technicians } = problem;
  const another = {
    ...like,
    id: `one more than ${technicians.map(({ id }) => id).join()}`,
    skills: jobs.flatMap(({ skills }) => skills),
    parts: Object.fromEntries(counted(jobs.flatMap(partsOf))),
    frozen: [],
  };
  const tried = plan(
    {
      ...problem,
      jobs: jobs.map(({ onlyTechnicians: _, ...job }) => job),
      technicians: [...technicians, another],
      previous: result,
    },
    { iterations: 0, seed: 1 },
  );
  const skillsOf = new Map(jobs.map(({ id, skills }) => [id, skills]));
  const own = tried.routes.filter(({ technician }) => technician === another.id);
  return own
    .flatMap(({ stops }) => stops)
    .filter(({ job }) => left.has(job))
    .map(({ job }) => {
      const skills = skillsOf.get(job) ?? [];
      const having = skills.length === 0 ? '' : ` with ${skills.join(' and ')}`;
      return [job, `one more technician${having}`];
    });
}
