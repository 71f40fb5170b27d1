import type { Sequelize, Transaction } from 'sequelize';
import type { CallDetail } from '@shared/contract/calls';
import type { CallState } from '@shared/domain/call-state';
import { Refusal } from '@shared/domain/errors';
import type { Instant } from '@shared/domain/instant';
import { select } from '../db/sql';
import { messageDtos } from '../texts/message-rows';
import { CallRecord } from './call-record';
import { callRows } from './call-rows';
import { readUnits } from './read-units';

/** Everything about one call. @throws Refusal `not-found` */
export async function callDetail(
  sequelize: Sequelize,
  callId: string,
  now: Instant,
  tx?: Transaction,
): Promise<CallDetail> {
  const call = await CallRecord.findByPk(callId, tx ? { transaction: tx } : {});
  if (!call) throw new Refusal('not-found', 'There is no such call.');
  return detailOf(sequelize, call, now, tx);
}

/** As `callDetail`, of a call that a command has just stored. */
export async function detailOf(
  sequelize: Sequelize,
  call: CallRecord,
  now: Instant,
  tx?: Transaction,
): Promise<CallDetail> {
  const callId = call.id;
  const [row] = await callRows(sequelize, { ids: [callId] }, now, tx);
  if (!row) throw new Refusal('not-found', 'There is no such call.');
  const units = await readUnits(callId, tx);
  return {
    row,
    language: call.language,
    mayText: call.mayText,
    powerOutAt: call.powerOutAt.getTime(),
    powerBackAt: call.powerBackAt?.getTime() ?? null,
    powerOnSpans: call.powerOnSpans,
    timesFrom: call.timesFrom,
    units: units.map(({ facts }) => facts),
    clockReasons: units.map(({ reasons }) => reasons),
    phoneCheck: call.phoneCheck,
    remarks: await remarksOf(sequelize, callId, tx),
    history: await historyOf(sequelize, callId, tx),
    messages: await messageDtos(sequelize, { callId }, tx),
  };
}

async function remarksOf(
  sequelize: Sequelize,
  callId: string,
  tx?: Transaction,
): Promise<CallDetail['remarks']> {
  const rows = await select<{ at: Date; actor: string; text: string }>(
    sequelize,
    'SELECT at, actor, text FROM remarks WHERE call_id = ? ORDER BY at, id',
    [callId],
    tx,
  );
  return rows.map(({ at, actor, text }) => ({ at: at.getTime(), by: actor, text }));
}

async function historyOf(
  sequelize: Sequelize,
  callId: string,
  tx?: Transaction,
): Promise<CallDetail['history']> {
  const rows = await select<{
    at: Date;
    from_state: CallState | null;
    to_state: CallState;
    actor: string;
    reason: string;
  }>(
    sequelize,
    'SELECT at, from_state, to_state, actor, reason FROM call_changes WHERE call_id = ? ORDER BY n',
    [callId],
    tx,
  );
  return rows.map((row) => ({
    at: row.at.getTime(),
    from: row.from_state,
    to: row.to_state,
    by: row.actor,
    reason: row.reason,
  }));
}
