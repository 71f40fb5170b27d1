import type { LonLat } from '@shared/contract/common';
import type { Instant } from '@shared/domain/instant';
import type { AddressPoint } from '../region/address-points';
import type { Chance } from './demo-calls';
import { outageFinder, type DemoOutage } from './demo-outages';

/** A house whose power came back and whose refrigerator did not. */
export interface DemoCaller {
  readonly address: AddressPoint;
  readonly outAt: Instant;
  readonly backAt: Instant;
}

/** Degrees of latitude, about 240 m: as far as the harm of one branch of a feeder reaches. */
const BRANCH_REACH = 0.0022;
const TRIED_BRANCHES = 8;
/** Share of the houses elsewhere that fail as often as those on a harmed branch. */
const ELSEWHERE = 0.006;

/**
 * Houses that ring, one for each of `count`. Power that comes back with a surge does more harm in
 * one feeder than in another, and most of it on one branch: calls come in pockets.
 */
export function demoCallers(
  outages: readonly DemoOutage[],
  addresses: readonly AddressPoint[],
  chance: Chance,
  count: number,
): DemoCaller[] {
  const branches: LonLat[] = [];
  const groups = restored(outages, addresses).map((doors) => {
    const branch = branchAmong(doors, branches, chance);
    branches.push(branch);
    const harmed = doors.filter(
      ({ address }) => isNear(address.at, branch) || chance.next() < ELSEWHERE,
    );
    return { doors: harmed, weight: Math.sqrt(harmed.length) * (0.25 + chance.next()) };
  });
  const total = groups.reduce((sum, { weight }) => sum + weight, 0);
  return Array.from({ length: groups.length === 0 ? 0 : count }, () => {
    let left = chance.next() * total;
    const group = groups.find(({ weight }) => (left -= weight) <= 0) ?? groups[0]!;
    return chance.pick(group.doors);
  });
}

/** The houses that have power again, by the outage that counted for them. */
function restored(
  outages: readonly DemoOutage[],
  addresses: readonly AddressPoint[],
): DemoCaller[][] {
  const outageAt = outageFinder(outages);
  const byOutage = new Map<DemoOutage, DemoCaller[]>();
  for (const address of addresses) {
    const outage = outageAt([address.at[0], address.at[1]]);
    if (outage === null || outage.backAt === null) continue;
    const own = byOutage.get(outage) ?? [];
    byOutage.set(outage, own);
    own.push({ address, outAt: outage.outAt, backAt: outage.backAt });
  }
  return [...byOutage.values()];
}

/** One of a feeder's doors, of a few the one that lies farthest from the branches harmed elsewhere. */
function branchAmong(
  doors: readonly DemoCaller[],
  others: readonly LonLat[],
  chance: Chance,
): LonLat {
  const off = (at: LonLat): number =>
    Math.min(...others.map((other) => Math.hypot(at[0] - other[0], at[1] - other[1])));
  const tried = Array.from({ length: TRIED_BRANCHES }, (): LonLat => {
    const { at } = chance.pick(doors).address;
    return [at[0], at[1]];
  });
  return tried.reduce((best, at) => (off(at) > off(best) ? at : best));
}

/** In a square of sides that are longer from north to south; nobody measures the harm. */
const isNear = (a: Readonly<LonLat>, b: Readonly<LonLat>): boolean =>
  Math.abs(a[0] - b[0]) < BRANCH_REACH && Math.abs(a[1] - b[1]) < BRANCH_REACH;
