import type { StormOutcome } from './run-storm';
import { NEVER, STAKES, type Stake } from './storm';

/** What a policy made of a storm. Households that called off count nowhere. */
export interface StormFigures {
  /** Dollars of food and medicine at stake, and how many of them were saved. */
  readonly valueAtStake: number;
  readonly valueSaved: number;
  readonly valueLost: number;
  /** Of the compartments at stake, the share that was visited in time, 0 to 1. */
  readonly fridgesInTime: number;
  readonly freezersInTime: number;
  readonly medicineInTime: number;
  /** Share of the promised windows within which the visit began. */
  readonly windowsKept: number;
  readonly visits: number;
  readonly notVisited: number;
  readonly driveMinutes: number;
  readonly driveMinutesPerStop: number;
  readonly overtimeHours: number;
  /** Hours from call to visit, of those visited; of all, with the rest waiting to the storm's end. */
  readonly waitHoursVisited: number;
  readonly waitHoursAll: number;
}

export function stormFigures({ calls, ...run }: StormOutcome, end: number): StormFigures {
  // The same calls for every policy: those that are never called off, visited or not.
  const counted = calls.filter(({ call }) => call.cancelledAt === NEVER);
  const stakes = counted.flatMap(({ call, startedAt }) =>
    call.stakes.map((stake) => ({ ...stake, isSaved: (startedAt ?? NEVER) <= stake.at })),
  );
  const inTime = (kind: Stake['kind']): number =>
    share(stakes.filter((stake) => stake.kind === kind).map(({ isSaved }) => isSaved));
  const valueAtStake = sum(stakes.map(({ value }) => value));
  const valueSaved = sum(stakes.map(({ value, isSaved }) => (isSaved ? value : 0)));
  const visited = calls.filter(({ startedAt }) => startedAt !== null);
  const countedVisits = counted.filter(({ startedAt }) => startedAt !== null);
  const driveMinutes = run.driveSeconds / 60;
  const waits = counted.map(({ call, startedAt }) => (startedAt ?? end) - call.calledAt);
  const [fridgesInTime, freezersInTime, medicineInTime] = STAKES.map(inTime);
  return {
    valueAtStake,
    valueSaved,
    valueLost: valueAtStake - valueSaved,
    fridgesInTime: fridgesInTime!,
    freezersInTime: freezersInTime!,
    medicineInTime: medicineInTime!,
    windowsKept: share(
      counted
        .filter(({ call }) => call.window !== null)
        .map(({ call, startedAt }) => (startedAt ?? NEVER) <= call.window![1]),
    ),
    visits: visited.length,
    notVisited: counted.length - countedVisits.length,
    driveMinutes,
    driveMinutesPerStop: driveMinutes / Math.max(1, visited.length),
    overtimeHours: run.overtimeSeconds / 3600,
    waitHoursVisited:
      sum(countedVisits.map(({ call, startedAt }) => startedAt! - call.calledAt)) /
      3600 /
      Math.max(1, countedVisits.length),
    waitHoursAll: sum(waits) / 3600 / Math.max(1, waits.length),
  };
}

const sum = (numbers: readonly number[]): number => numbers.reduce((total, one) => total + one, 0);
const share = (facts: readonly boolean[]): number =>
  facts.length === 0 ? 1 : facts.filter(Boolean).length / facts.length;
