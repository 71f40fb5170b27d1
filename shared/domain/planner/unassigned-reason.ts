import type { CompiledProblem, ShiftStart } from './compiled-problem';
import { NO_WAY_SECONDS, type UnassignedJob } from './problem';
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
  const shifts = c.shifts.filter((shift) => withPart.includes(shift.technician));
  if (shifts.length > 0 && !shifts.some((shift) => canDriveTo(job, shift, c))) {
    return {
      reason: 'unreachable',
      because: 'No open road leads there and back for those who may go.',
    };
  }
  if (!shifts.some((shift) => hasTime(job, shift, c))) {
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

/** Whether roads lead from where the shift begins to the job, and on to where it ends. */
function canDriveTo(job: number, { startLoc, endLoc }: ShiftStart, c: CompiledProblem): boolean {
  const place = c.loc[job]!;
  return (
    c.travel[startLoc * c.locations + place]! < NO_WAY_SECONDS &&
    c.travel[place * c.locations + endLoc]! < NO_WAY_SECONDS
  );
}

/** Whether the shift could hold this visit if it held nothing but its accepted stops. */
function hasTime(job: number, shift: ShiftStart, c: CompiledProblem): boolean {
  const route = new Route(c, shift);
  route.put(route.count, job);
  route.refresh();
  return route.isWithinLimit;
}
