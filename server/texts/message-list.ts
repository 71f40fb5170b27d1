import { Op, type Sequelize } from 'sequelize';
import type { MessageList } from '@shared/contract/messages';
import { select } from '../db/sql';
import { MessageRecord } from './message-record';
import { toMessageDto } from './message-rows';

const MOST_RECENT = 200;
/** More than this nobody works through; the counts tell of the rest. */
const MOST_IN_NEED = 500;

/**
 * The texts of a storm. Those that belong to no storm, such as a reply that came while none was
 * open, are shown with every one, so that somebody sees them.
 *
 * A text needs a person while nobody has looked after it: one of unknown fate, one that failed, or
 * a reply that belongs to no open call. `readAt` is set once somebody has.
 */
export async function messageList(sequelize: Sequelize, stormId: string): Promise<MessageList> {
  const ofStorm = { [Op.or]: [{ stormId }, { stormId: null }] };
  const needPerson = await MessageRecord.findAll({
    where: {
      [Op.and]: [
        ofStorm,
        { readAt: null },
        {
          [Op.or]: [
            { direction: 'out', state: ['unknown', 'failed', 'undelivered'] },
            { direction: 'in', callId: null },
          ],
        },
      ],
    },
    order: [
      ['at', 'ASC'],
      ['id', 'ASC'],
    ],
    limit: MOST_IN_NEED,
  });
  const recent = await MessageRecord.findAll({
    where: ofStorm,
    order: [
      ['at', 'DESC'],
      ['id', 'DESC'],
    ],
    limit: MOST_RECENT,
  });
  const counts = await select<{ state: string; n: number; sent: number }>(
    sequelize,
    // The service bills what it took, whatever became of it.
    `SELECT state, COUNT(*) AS n,
            SUM(IF(direction = 'out' AND (provider_sid IS NOT NULL
                   OR state IN ('sent','delivered','undelivered')), segments, 0)) AS sent
       FROM messages
      WHERE storm_id = ? OR storm_id IS NULL
      GROUP BY state`,
    [stormId],
  );
  return {
    needPerson: needPerson.map(toMessageDto),
    recent: recent.map(toMessageDto),
    countsByState: Object.fromEntries(counts.map(({ state, n }) => [state, Number(n)])),
    segmentsSent: counts.reduce((sum, { sent }) => sum + Number(sent), 0),
  };
}
