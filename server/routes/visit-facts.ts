import type { Sequelize, Transaction } from 'sequelize';
import type { Settings } from '@shared/contract/office';
import { HOUR_MS, type Instant } from '@shared/domain/instant';
import type { TimeWindow } from '@shared/domain/route-times';
import { serviceMinutesOf, type LearnedService } from '@shared/domain/service-times';
import { CAUSES } from '@shared/domain/phone-check/causes';
import { likeliestCause, likeliestOfUnits } from '@shared/domain/phone-check/likeliest-cause';
import type { Part } from '@shared/domain/skills';
import { toldWindow } from '@shared/domain/texts/eta-moved';
import { json, select } from '../db/sql';

/** What a visit to a call will take, and what the customer was told of it. */
export interface VisitFacts {
  /** The likeliest cause; `null` when nothing is known. */
  readonly cause: string | null;
  /**
   * What the visit has to bring, for each cold unit: of its likeliest cause the likeliest part, since a
   * cause's parts are one or the other (a short may be in the cord or in the heater), and who lacks one
   * still finds the fault; of an unknown cause all that the call names. What two units take stands twice.
   */
  readonly needs: readonly Part[];
  /** Cold units of the call. */
  readonly units: number;
  /** Agreed with the customer, or told by text for a visit that did not come. */
  readonly window: TimeWindow | null;
}

/** A promise that was broken longer ago makes nobody wait at the door: our estimate. */
const PROMISE_STANDS_MS = 12 * HOUR_MS;

/** By call, those named. */
export async function visitFacts(
  sequelize: Sequelize,
  callIds: readonly string[],
  now: Instant,
  tx: Transaction,
): Promise<Map<string, VisitFacts>> {
  if (callIds.length === 0) return new Map();
  const rows = await select<{
    id: string;
    causes: unknown;
    parts: unknown;
    window_from: Date | null;
    window_to: Date | null;
    units: number;
    told_eta_at: Date | null;
  }>(
    sequelize,
    `SELECT c.id, c.causes, c.parts, c.window_from, c.window_to,
            (SELECT COUNT(*) FROM cold_units u WHERE u.call_id = c.id) AS units,
            told.told_eta_at
       FROM calls c
       LEFT JOIN (SELECT call_id, told_eta_at, state,
                         ROW_NUMBER() OVER (PARTITION BY call_id ORDER BY ended_at DESC) AS back
                    FROM stops WHERE call_id IN (?) AND told_eta_at IS NOT NULL AND ended_at IS NOT NULL
                 ) AS told ON told.call_id = c.id AND told.back = 1 AND told.state <> 'done'
      WHERE c.id IN (?)`,
    [[...callIds], [...callIds]],
    tx,
  );
  return new Map(
    rows.map((row) => {
      const agreed =
        row.window_from && row.window_to
          ? { from: row.window_from.getTime(), to: row.window_to.getTime() }
          : null;
      const told = row.told_eta_at && toldWindow(row.told_eta_at.getTime());
      const causes = json<string[]>(row.causes);
      const cause = likeliestCause(causes);
      const window = agreed ?? told;
      return [
        row.id,
        {
          cause,
          needs:
            cause === null
              ? json<Part[]>(row.parts)
              : likeliestOfUnits(causes).flatMap((one) => CAUSES[one].parts.slice(0, 1)),
          units: Number(row.units),
          window: window && window.to + PROMISE_STANDS_MS > now ? window : null,
        },
      ];
    }),
  );
}

/** Whole minutes of work at the door. */
export const minutesAtDoor = (
  { cause, units }: Pick<VisitFacts, 'cause' | 'units'>,
  settings: Settings,
  learned: LearnedService | null,
  technicianId?: string,
): number =>
  serviceMinutesOf(
    { cause, units, ...(technicianId === undefined ? {} : { technicianId }) },
    settings,
    learned,
  );
