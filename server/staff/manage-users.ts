import type { BodyOf, ReplyOf } from '@shared/contract/http';
import type { UserDto } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import { isDuplicateOf } from '../db/sql';
import { orderFrom, runCommand, type Job } from '../commands/run-command';
import type { Context } from '../context';
import { hashPassword, makePassword } from './passwords';
import type { SignedIn } from './signed-in';
import { toUserDto } from './user-dto';
import { UserRecord } from './user-record';

export async function listUsers(): Promise<UserDto[]> {
  const users = await UserRecord.findAll({ order: [['name', 'ASC']] });
  return users.map(toUserDto);
}

/** Makes an account with a password that is shown once and must be replaced. */
export async function addUser(
  context: Context,
  person: SignedIn,
  body: BodyOf<'addUser'>,
): Promise<ReplyOf<'addUser'>> {
  const password = makePassword();
  const passwordHash = await hashPassword(password);
  const user = await runCommand(context, orderFrom('addUser', person, body), async (job) => {
    try {
      const made = await UserRecord.create(
        {
          id: body.userId,
          name: body.name,
          signInName: body.signInName,
          role: body.role,
          technicianId: body.role === 'technician' ? body.technicianId : null,
          passwordHash,
          mustChangePassword: true,
        },
        { transaction: job.tx },
      );
      job.note('user', made.id, `made an account with the role ${made.role}`);
      return toUserDto(made);
    } catch (error) {
      throw asRefusal(error);
    }
  });
  return withCurrentPassword(user, password, passwordHash);
}

/** Changes name, role or access; whatever touches rights ends the user's sessions at once. */
export function changeUser(
  context: Context,
  person: SignedIn,
  userId: string,
  body: BodyOf<'changeUser'>,
): Promise<UserDto> {
  return runCommand(context, orderFrom('changeUser', person, { userId, ...body }), async (job) => {
    const user = await lockUser(userId, body.version, job);
    if (user.id === person.userId && (body.disabled || (body.role && body.role !== user.role)))
      throw new Refusal('not-allowed', 'Nobody takes away their own access.');
    const rightsChange =
      (body.disabled !== undefined && body.disabled !== user.disabled) ||
      (body.role !== undefined && body.role !== user.role) ||
      (body.technicianId !== undefined && body.technicianId !== user.technicianId);
    user.set({
      ...(body.name === undefined ? {} : { name: body.name }),
      ...(body.role === undefined ? {} : { role: body.role }),
      ...(body.disabled === undefined ? {} : { disabled: body.disabled }),
      ...(body.technicianId === undefined ? {} : { technicianId: body.technicianId }),
      version: user.version + 1,
      sessionEpoch: user.sessionEpoch + (rightsChange ? 1 : 0),
    });
    if (user.role !== 'technician') user.technicianId = null;
    try {
      await user.save({ transaction: job.tx });
    } catch (error) {
      throw asRefusal(error);
    }
    job.note(
      'user',
      user.id,
      rightsChange ? 'changed the rights of an account' : 'renamed an account',
    );
    if (rightsChange)
      job.afterCommit(() =>
        context.live.endSockets({ userId: user.id }, 'Your rights have changed. Sign in again.'),
      );
    return toUserDto(user);
  });
}

/** Gives a new password and ends every session of the account. */
export async function resetPassword(
  context: Context,
  person: SignedIn,
  userId: string,
  body: BodyOf<'resetPassword'>,
): Promise<ReplyOf<'resetPassword'>> {
  const password = makePassword();
  const passwordHash = await hashPassword(password);
  const user = await runCommand(
    context,
    orderFrom('resetPassword', person, { userId, ...body }),
    async (job) => {
      const found = await lockUser(userId, body.version, job);
      found.set({
        passwordHash,
        mustChangePassword: true,
        version: found.version + 1,
        sessionEpoch: found.sessionEpoch + 1,
      });
      await found.save({ transaction: job.tx });
      job.note('user', found.id, 'gave an account a new password');
      job.afterCommit(() =>
        context.live.endSockets({ userId: found.id }, 'The password was replaced.'),
      );
      return toUserDto(found);
    },
  );
  return withCurrentPassword(user, password, passwordHash);
}

/**
 * A password is stored nowhere in the clear, so a repeated command cannot be answered with the
 * first one. It gets an empty password rather than a wrong one.
 */
async function withCurrentPassword(
  user: UserDto,
  password: string,
  passwordHash: string,
): Promise<ReplyOf<'addUser'>> {
  const stored = await UserRecord.findByPk(user.id);
  return { user, password: stored?.passwordHash === passwordHash ? password : '' };
}

async function lockUser(userId: string, version: number, job: Job): Promise<UserRecord> {
  const user = await UserRecord.findByPk(userId, { transaction: job.tx, lock: job.tx.LOCK.UPDATE });
  if (!user) throw new Refusal('not-found', 'There is no such account.');
  if (user.version !== version)
    throw new Refusal('stale-version', 'The account has changed meanwhile.', toUserDto(user));
  return user;
}

function asRefusal(error: unknown): unknown {
  if (isDuplicateOf(error, 'one_account'))
    return new Refusal('already-used', 'There is an account with this sign-in name.');
  if (isDuplicateOf(error, 'one_account_per_technician'))
    return new Refusal('already-used', 'This technician has an account already.');
  return error;
}
