import type { CallDetail } from '@shared/contract/calls';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { unbuilt } from '../http/unbuilt';
import { callDetail } from './call-detail';
import { takeCall } from './take-call';

type Names =
  | 'takeCall'
  | 'findHousehold'
  | 'readCall'
  | 'amendCall'
  | 'addRemark'
  | 'claimCall'
  | 'releaseCall'
  | 'answerPhoneCheck'
  | 'concludeCall'
  | 'returnToWaiting';

/** Calls: taken, claimed, checked by phone, settled or left waiting for a visit. */
export function callRoutes(context: Context): SomeHandlers<Names> {
  const detail = (job: Job, callId: string): Promise<CallDetail> =>
    callDetail(context.sequelize, callId, job.now, job.tx);

  return {
    ...unbuilt(
      'findHousehold',
      'amendCall',
      'addRemark',
      'claimCall',
      'releaseCall',
      'answerPhoneCheck',
      'concludeCall',
      'returnToWaiting',
    ),

    takeCall: ({ params, body, person }) =>
      runCommand(context, orderFrom('takeCall', person, { ...body, ...params }), async (job) => {
        const call = await takeCall(job, params.stormId, {
          ...body,
          receivedAt: job.now,
          source: 'phone',
        });
        return detail(job, call.id);
      }),

    readCall: ({ params }) => callDetail(context.sequelize, params.callId, context.clock()),
  };
}
