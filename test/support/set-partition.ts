import {
  DEFAULT_WEIGHTS,
  type PlanProblem,
  type PlanTechnician,
} from '@shared/domain/planner/problem';
import { absentCost, partsTaken, technicianShares } from './exact-plan';

/** A set of jobs for one technician, and what it saves against leaving them out. */
export interface Column {
  readonly technician: number;
  readonly mask: number;
  readonly cost: number;
  /** What it takes from a shop that has an end of parts, in the order of its list. */
  readonly taken: readonly number[];
}

/** Every set of jobs that each technician can serve; `fixed` is the price of serving nobody. */
export function columnsOf(problem: PlanProblem): { columns: Column[]; fixed: number } {
  const weights = { ...DEFAULT_WEIGHTS, ...problem.weights };
  const fixed = absentCost(problem, weights, 0);
  const limited = Object.keys(problem.shop?.parts ?? {});
  const columns = problem.technicians.flatMap((person: PlanTechnician, technician) =>
    [...technicianShares(problem, person)].map(([mask, share]) => ({
      technician,
      mask,
      cost: share.cost - (fixed - absentCost(problem, weights, mask)),
      taken: limited.map((part) => partsTaken(problem, person, mask, part)),
    })),
  );
  return { columns, fixed };
}

/** The same choice as the exact search's, as a whole-number program in CPLEX's LP format. */
export function setPartition(problem: PlanProblem, columns: readonly Column[]): string {
  const sum = (terms: readonly string[]): string => (terms.length > 0 ? terms.join(' ') : '0 x0');
  const all = (factor: (column: Column) => number): string =>
    sum(
      columns.flatMap((column, index) => {
        const value = factor(column);
        return value === 0 ? [] : [`${value < 0 ? '-' : '+'} ${Math.abs(value)} x${index}`];
      }),
    );
  const limits = Object.values(problem.shop?.parts ?? {});
  return [
    'Minimize',
    ` obj: ${all(({ cost }) => cost)}`,
    'Subject To',
    ...problem.technicians.map(
      (_, index) => ` t${index}: ${all(({ technician }) => (technician === index ? 1 : 0))} = 1`,
    ),
    ...problem.jobs.map((_, index) => ` j${index}: ${all(({ mask }) => (mask >> index) & 1)} <= 1`),
    ...limits.map((limit, index) => ` p${index}: ${all(({ taken }) => taken[index]!)} <= ${limit}`),
    'Binary',
    ` ${columns.map((_, index) => `x${index}`).join(' ')}`,
    'End',
  ].join('\n');
}
