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

/**
 * Houses that ring, one for each of `count`. Power that comes back with a surge does more harm in
 * one feeder than in another, so some outages bring many calls and others a few.
 */
export function demoCallers(
  outages: readonly DemoOutage[],
  addresses: readonly AddressPoint[],
  chance: Chance,
  count: number,
): DemoCaller[] {
  const outageAt = outageFinder(outages);
  const byOutage = new Map<DemoOutage, DemoCaller[]>();
  for (const address of addresses) {
    const outage = outageAt([address.at[0], address.at[1]]);
    if (outage === null || outage.backAt === null) continue;
    const own = byOutage.get(outage) ?? [];
    byOutage.set(outage, own);
    own.push({ address, outAt: outage.outAt, backAt: outage.backAt });
  }
  const groups = [...byOutage.values()].map((doors) => {
    const harm = chance.next();
    return { doors, weight: doors.length * harm * harm };
  });
  const total = groups.reduce((sum, { weight }) => sum + weight, 0);
  return groups.length === 0
    ? []
    : Array.from({ length: count }, () => {
        let left = chance.next() * total;
        const group = groups.find(({ weight }) => (left -= weight) <= 0) ?? groups[0]!;
        return chance.pick(group.doors);
      });
}
