import type { Position } from '@shared/contract/routes';
import { Refusal } from '@shared/domain/errors';
import type { Context } from '../context';
import { change } from '../db/sql';
import { followPosition } from '../routes/follow-position';

/**
 * Where a technician is. Not a command: a van sends its position every few seconds, each replaces the
 * one before, and neither the audit trail nor the feed would gain from them. Only an arrival time
 * that moves because of it is a command, of the machine's own.
 */
export async function reportPosition(
  context: Context,
  technicianId: string | null,
  sent: Position,
): Promise<void> {
  if (technicianId === null)
    throw new Refusal('not-found', 'This account belongs to no technician.');
  // A phone's clock may run ahead; a position from the future would outlive all that follow.
  const position = { ...sent, at: Math.min(sent.at, context.clock()) };
  const at = new Date(position.at);
  const [lon, lat] = position.lonLat;
  const changed = await change(
    context.sequelize,
    `UPDATE technicians
        SET position_lon = ?, position_lat = ?, position_at = ?, position_accuracy_meters = ?
      WHERE id = ? AND (position_at IS NULL OR position_at < ?)`,
    [lon, lat, at, position.accuracyMeters, technicianId, at],
  );
  // Older than what is known already: it was sent late.
  if (changed === 0) return;
  context.live.technicianMoved(technicianId, position);
  await followPosition(context, technicianId, position);
}
