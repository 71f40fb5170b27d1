import type { IncomingMessage } from 'node:http';
import type { RequestHandler } from 'express';
import passport from 'passport';
import { Strategy } from 'passport-local';
import { byCallback } from '../http/by-callback';
import { hashPassword, isOutdated, isPassword, pretendToCheck } from './passwords';
import type { SignedIn } from './signed-in';
import { UserRecord } from './user-record';

declare global {
  // Passport's own way to say what `request.user` is.
  // eslint-disable-next-line @typescript-eslint/no-namespace
  namespace Express {
    interface User {
      readonly id: string;
      /** The user's epoch at sign-in; a later one voids the session. */
      readonly epoch: number;
    }
  }
}

/** Where people are let in: the middlewares of a session, and the check of a password. */
export interface SignInDesk {
  readonly middlewares: readonly RequestHandler[];
  check(signInName: string, password: string): Promise<Express.User | null>;
}

/** Makes passport of our users: a name, a password, and what a session keeps of them. */
export function signInDesk(): SignInDesk {
  const desk = new passport.Passport();
  const strategy = new Strategy({ usernameField: 'signInName' }, (signInName, password, done) => {
    checkPassword(signInName, password).then(
      (user) => done(null, user ?? false),
      (error: unknown) => done(error),
    );
  });
  desk.use(strategy);
  desk.serializeUser((user, done) => done(null, { id: user.id, epoch: user.epoch }));
  desk.deserializeUser((kept: Express.User, done) => done(null, kept));
  return {
    middlewares: [desk.initialize() as RequestHandler, desk.session() as RequestHandler],
    check: (signInName, password) =>
      byCallback<Express.User | null>((done) => {
        const authenticate = desk.authenticate(
          'local',
          { session: false },
          (error: unknown, user: Express.User | false | null) => done(error, user || null),
        ) as (request: unknown, response: unknown, next: (error?: unknown) => void) => void;
        // Passport's strategies read a request; ours needs the two fields only.
        authenticate({ body: { signInName, password } }, {}, (error) => done(error, null));
      }),
  };
}

async function checkPassword(signInName: string, password: string): Promise<Express.User | null> {
  const user = await UserRecord.findOne({ where: { signInName: signInName.trim().toLowerCase() } });
  if (!user || user.disabled) {
    await pretendToCheck(password);
    return null;
  }
  if (!(await isPassword(user.passwordHash, password))) return null;
  if (isOutdated(user.passwordHash)) {
    user.passwordHash = await hashPassword(password);
    await user.save();
  }
  return { id: user.id, epoch: user.sessionEpoch };
}

/** Who a request is signed in as, by the database as it is now: rights change at once. */
export async function personOf(
  request: IncomingMessage & { user?: Express.User; sessionID?: string },
): Promise<SignedIn | null> {
  const kept = request.user;
  if (!kept || !request.sessionID) return null;
  const user = await UserRecord.findByPk(kept.id);
  if (!user || user.disabled || user.sessionEpoch !== kept.epoch) return null;
  return {
    userId: user.id,
    name: user.name,
    role: user.role,
    technicianId: user.technicianId,
    mustChangePassword: user.mustChangePassword,
    sessionId: request.sessionID,
    epoch: user.sessionEpoch,
  };
}
