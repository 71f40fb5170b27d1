import type { CompiledProblem, ShiftStart } from './compiled-problem';
import type { UnassignedJob } from './problem';
import { Route } from './route';
import type { Search } from './search';

type Reason = Pick<UnassignedJob, 'reason' | 'because'>;

/** Why a job is on no route, the hardest reason first. */
export function unassignedReason(job: number, search: Search, c: CompiledProblem): Reason {
  const technicians = Array.from({ length: c.technicianCount }, (_, technician) => technician);
  const skilled = technicians.filter((t) => c.mayServe[t * c.jobCount + job]);
  if (skilled.length === 0) return noSkill(job, c);

  const part = c.part[job]!;
  const withPart = skilled.filter((t) => part < 0 || c.stock[t * c.partCount + part]! > 0);
  const name = c.problem.jobs[job]!.part;
  if (withPart.length === 0) {
    return { reason: 'part', because: `No van of those who may go carries: ${name}.` };
  }
  const withPartLeft = withPart.filter((t) => part < 0 || search.partsLeft(t, part) > 0);
  if (!c.shifts.some((shift) => withPart.includes(shift.technician) && hasTime(job, shift, c))) {
    return {
      reason: 'no_shift',
      because: 'No shift of those who may go is long enough for this visit.',
    };
  }
  if (withPartLeft.length === 0) {
    return { reason: 'part', because: `Other visits take the last on the vans of: ${name}.` };
  }
  return { reason: 'capacity', because: 'The time goes to visits that save more.' };
}

function noSkill(job: number, c: CompiledProblem): Reason {
  const { skills, onlyTechnicians } = c.problem.jobs[job]!;
  const needed = skills.length > 0 ? `the skill: ${skills.join(', ')}` : 'leave to go';
  return onlyTechnicians
    ? { reason: 'skill', because: `None of the technicians it is limited to has ${needed}.` }
    : { reason: 'skill', because: `No technician has ${needed}.` };
}

/** Whether the shift could hold this visit if it held nothing but its accepted stops. */
function hasTime(job: number, shift: ShiftStart, c: CompiledProblem): boolean {
  const route = new Route(c, shift);
  route.put(route.count, job);
  route.refresh();
  return route.isWithinLimit;
}
