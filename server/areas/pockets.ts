import type { PocketDto } from '@shared/contract/areas';
import type { CallRow } from '@shared/contract/calls';
import { isOpen } from '@shared/domain/call-state';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import type { PocketCall } from '@shared/domain/pockets/pocket-summary';
import { callRows } from '../calls/call-rows';
import { BOARD } from '../commands/feed';
import type { Context } from '../context';
import { readSettings } from '../office/settings';
import { endOf } from '../realtime/feed-reader';

interface Known {
  readonly n: number;
  readonly at: Instant;
  readonly pockets: readonly PocketDto[];
}

/** Values and save-bys drift with time even when no call changes. */
const FRESH_MS = HOUR_MS / 60;

const known = new WeakMap<Context['sequelize'], Map<string, Known>>();

/** The pockets of a storm's open calls; worked out again only when something has changed. */
export async function pocketsOf(context: Context, stormId: string): Promise<PocketDto[]> {
  const byStorm = known.get(context.sequelize) ?? new Map<string, Known>();
  known.set(context.sequelize, byStorm);
  const before = byStorm.get(stormId);
  const n = await endOf(context.sequelize, stormId, BOARD);
  const now = context.clock();
  if (before?.n === n && now - before.at < FRESH_MS) return [...before.pockets];

  const { pocketKm, pocketCalls } = await readSettings(context.sequelize);
  const calls = (await callRows(context.sequelize, { stormId }, now)).filter(
    (call) => isOpen(call.state) && call.state !== 'on-site',
  );
  const found = await context.pockets.run({
    calls: calls.flatMap((call) => toPocketCall(call, now)),
    options: {
      epsKm: pocketKm,
      minPoints: pocketCalls,
      previous: (before?.pockets ?? []).map(({ key, callIds }) => ({ key, members: callIds })),
    },
  });
  const pockets = found.pockets.map((pocket): PocketDto => ({
    key: pocket.key,
    name: nameOf(context, [...pocket.centroid]),
    callIds: [...pocket.members],
    centre: [...pocket.centroid],
    hull: (pocket.outline.coordinates[0] ?? []).map(([lon = 0, lat = 0]) => [lon, lat]),
    valueAtRiskCents: pocket.valueAtRiskCents,
    nextSaveByAt: pocket.nextSaveByAt,
  }));
  byStorm.set(stormId, { n, at: now, pockets });
  return pockets;
}

function toPocketCall(call: CallRow, now: Instant): PocketCall[] {
  if (!call.address.lonLat) return [];
  const live = call.units
    .flatMap((unit) => unit.compartments)
    .filter((one) => one.saveByAt === null || one.saveByAt > now);
  const saveBys = live.flatMap((one) => one.saveByAt ?? []);
  return [
    {
      id: call.id,
      at: call.address.lonLat,
      valueAtRiskCents: live.reduce((sum, one) => sum + one.valueCents, 0),
      nextSaveByAt: saveBys.length > 0 ? Math.min(...saveBys) : null,
    },
  ];
}

/** A pocket is called after the street in its middle: people know streets, not numbers. */
function nameOf({ region }: Context, centre: [number, number]): string {
  const label = region.nearest(centre)?.label ?? '';
  return (
    label
      .replace(/^\d+[A-Za-z]?(-\d+)?\s+/, '')
      .split(',')
      .slice(0, 2)
      .join(',') || 'Pocket'
  );
}
