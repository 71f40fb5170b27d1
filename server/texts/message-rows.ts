import { Op, type Sequelize, type Transaction } from 'sequelize';
import type { MessageDto } from '@shared/contract/messages';
import { MessageRecord } from './message-record';

/** Texts by id or of a call, oldest first. */
export async function messageDtos(
  _sequelize: Sequelize,
  which: { readonly ids: readonly string[] } | { readonly callId: string },
  tx?: Transaction,
): Promise<MessageDto[]> {
  if ('ids' in which && which.ids.length === 0) return [];
  const records = await MessageRecord.findAll({
    where: 'ids' in which ? { id: { [Op.in]: [...which.ids] } } : { callId: which.callId },
    order: [
      ['at', 'ASC'],
      ['id', 'ASC'],
    ],
    ...(tx ? { transaction: tx } : {}),
  });
  return records.map(toMessageDto);
}

export function toMessageDto(record: MessageRecord): MessageDto {
  return {
    id: record.id,
    callId: record.callId,
    phone: record.phone,
    direction: record.direction,
    body: record.body,
    state: record.state,
    milestone: record.milestone,
    segments: record.segments,
    at: record.at.getTime(),
    trouble: record.trouble,
    readAt: record.readAt?.getTime() ?? null,
    version: record.version,
  };
}
