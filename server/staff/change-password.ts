import { randomUUID } from 'node:crypto';
import type { BodyOf } from '@shared/contract/http';
import { Refusal } from '@shared/domain/errors';
import { orderFrom, runCommand } from '../commands/run-command';
import type { Context } from '../context';
import { hashPassword, isPassword, refuseGuessable } from './passwords';
import type { SignedIn } from './signed-in';
import { UserRecord } from './user-record';

/**
 * Replaces a person's own password.
 *
 * @returns the user's session epoch afterwards; older sessions are void when it has risen
 * @throws Refusal when the current one is wrong or the new one is easily guessed
 */
export async function changePassword(
  context: Context,
  person: SignedIn,
  { current, next, endOtherSessions }: BodyOf<'changePassword'>,
): Promise<{ epoch: number }> {
  const user = await UserRecord.findByPk(person.userId);
  if (!user || !(await isPassword(user.passwordHash, current)))
    throw new Refusal('password-refused', 'The current password is not right.');
  if (next === current)
    throw new Refusal('password-refused', 'The new password is the same as the old one.');
  refuseGuessable(next, [...user.name.split(' '), ...user.signInName.split('@')]);
  const passwordHash = await hashPassword(next);

  // Nothing of a password goes into the order: orders are remembered by their fingerprint.
  const order = orderFrom('changePassword', person, { commandId: randomUUID() });
  return runCommand(context, order, async (job) => {
    await user.reload({ transaction: job.tx, lock: job.tx.LOCK.UPDATE });
    user.set({
      passwordHash,
      mustChangePassword: false,
      version: user.version + 1,
      sessionEpoch: user.sessionEpoch + (endOtherSessions ? 1 : 0),
    });
    await user.save({ transaction: job.tx });
    job.note('user', user.id, 'changed the password');
    if (endOtherSessions)
      job.afterCommit(() =>
        context.live.endSockets({ userId: user.id }, 'The password was changed.'),
      );
    return { epoch: user.sessionEpoch };
  });
}
