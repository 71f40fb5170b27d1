import type { Sequelize } from 'sequelize';
import { select } from '../db/sql';
import type { SignedIn } from './signed-in';

/**
 * Which of these sign-ins still hold, by the database as it is now: the session has neither run out
 * nor been ended, and the person's rights are those they signed in with.
 *
 * @returns the ids of their sessions
 */
export async function stillSignedIn(
  sequelize: Sequelize,
  people: readonly Pick<SignedIn, 'userId' | 'sessionId' | 'epoch'>[],
): Promise<ReadonlySet<string>> {
  if (people.length === 0) return new Set();
  const sessions = await select<{ sid: string }>(
    sequelize,
    'SELECT sid FROM sessions WHERE sid IN (?) AND expires > ?',
    [[...new Set(people.map(({ sessionId }) => sessionId))], new Date()],
  );
  const users = await select<{ id: string; session_epoch: number }>(
    sequelize,
    'SELECT id, session_epoch FROM users WHERE id IN (?) AND NOT disabled',
    [[...new Set(people.map(({ userId }) => userId))]],
  );
  const alive = new Set(sessions.map(({ sid }) => sid));
  const epochs = new Map(users.map((user) => [user.id, user.session_epoch]));
  return new Set(
    people
      .filter((one) => alive.has(one.sessionId) && epochs.get(one.userId) === one.epoch)
      .map(({ sessionId }) => sessionId),
  );
}
