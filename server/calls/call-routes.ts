import type { CallDetail } from '@shared/contract/calls';
import type { RouteName } from '@shared/contract/paths';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import type { SignedIn } from '../staff/signed-in';
import { amendCall } from './amend-call';
import { callDetail, detailOf } from './call-detail';
import type { CallRecord } from './call-record';
import { lockCall, saveCall, writeRemark } from './change-call';
import {
  answerPhoneCheck,
  claimCall,
  concludeCall,
  releaseCall,
  returnToWaiting,
} from './check-by-phone';
import { findHousehold } from './find-household';
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
  /** Every change of a call answers with the whole call as it then is. */
  const changed = (
    name: RouteName,
    {
      person,
      body,
      params,
    }: {
      readonly person: SignedIn;
      readonly body: { readonly commandId: string };
      readonly params: Readonly<Record<string, string>>;
    },
    work: (job: Job) => Promise<CallRecord>,
  ): Promise<CallDetail> =>
    runCommand(context, orderFrom(name, person, { ...body, ...params }), async (job) => {
      const call = await work(job);
      return detailOf(context.sequelize, call, job.now, job.tx);
    });

  return {
    takeCall: (asked) =>
      changed('takeCall', asked, (job) =>
        takeCall(job, asked.params.stormId, {
          ...asked.body,
          receivedAt: job.now,
          source: 'phone',
        }),
      ),

    findHousehold: ({ params, query }) =>
      findHousehold(context, params.stormId, query.phone, context.clock()),

    readCall: ({ params }) => callDetail(context.sequelize, params.callId, context.clock()),

    amendCall: (asked) =>
      changed('amendCall', asked, (job) => amendCall(job, asked.params.callId, asked.body)),

    addRemark: (asked) =>
      changed('addRemark', asked, async (job) => {
        const call = await lockCall(job, asked.params.callId);
        await writeRemark(job, call.id, asked.body.text);
        await saveCall(job, call);
        job.note('call', call.id, 'added a remark');
        return call;
      }),

    claimCall: (asked) => changed('claimCall', asked, (job) => claimCall(job, asked.params.callId)),

    releaseCall: (asked) =>
      changed('releaseCall', asked, (job) => releaseCall(job, asked.params.callId)),

    answerPhoneCheck: (asked) =>
      changed('answerPhoneCheck', asked, (job) =>
        answerPhoneCheck(job, asked.params.callId, asked.body),
      ),

    concludeCall: (asked) =>
      changed('concludeCall', asked, (job) => concludeCall(job, asked.params.callId, asked.body)),

    returnToWaiting: (asked) =>
      changed('returnToWaiting', asked, (job) =>
        returnToWaiting(job, asked.params.callId, asked.body.version, asked.body),
      ),
  };
}
