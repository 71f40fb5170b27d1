import type { Request } from 'express';
import type { MaybeMe } from '@shared/contract/office';
import { Refusal } from '@shared/domain/errors';
import type { Context } from '../context';
import type { SomeHandlers } from '../http/bind-routes';
import { byCallback } from '../http/by-callback';
import { giveToken, takeTokenBack } from '../http/security';
import { cookieName } from '../http/sessions';
import { readSettings } from '../office/settings';
import { openStorm } from '../storms/storm-queries';
import { addUser, changeUser, listUsers, resetPassword } from './manage-users';
import { changePassword } from './change-password';
import { personOf, type SignInDesk } from './person';
import { SignInLimit } from './sign-in-limit';
import type { SignedIn } from './signed-in';
import { toUserDto } from './user-dto';
import { UserRecord } from './user-record';

type Names =
  | 'me'
  | 'signIn'
  | 'signOut'
  | 'changePassword'
  | 'listUsers'
  | 'addUser'
  | 'changeUser'
  | 'resetPassword';

/** Signing in and out, and the accounts. */
export function staffRoutes(context: Context, desk: SignInDesk): SomeHandlers<Names> {
  const limit = new SignInLimit(context.sequelize);

  return {
    me: async ({ maybePerson, http }) => {
      if (maybePerson) giveToken(context.config, http.request, http.response);
      return { me: maybePerson && (await meOf(context, maybePerson)) };
    },

    signIn: async ({ body, http: { request, response } }) => {
      const address = request.ip ?? 'unknown';
      await limit.check(body.signInName, address, context.clock());
      const user = await desk.check(body.signInName, body.password);
      if (!user) {
        await limit.failed(body.signInName, address, context.clock());
        // One sentence for an unknown name and a wrong password: it tells a guesser nothing.
        throw new Refusal('sign-in-failed', 'The name or the password is wrong.');
      }
      await limit.succeeded(body.signInName, address);
      // Passport gives the session a new id here, so that one planted before is worth nothing.
      await logIn(request, user);
      const person = await personOf(request);
      if (!person) throw new Refusal('sign-in-failed', 'The account was disabled just now.');
      giveToken(context.config, request, response);
      context.log.info({ userId: person.userId }, 'signed in');
      return meOf(context, person);
    },

    signOut: async ({ maybePerson, http: { request, response } }) => {
      if (maybePerson) {
        context.live.endSockets({ sessionId: maybePerson.sessionId }, 'Signed out.');
        await byCallback((done) => request.session.destroy(done));
        context.log.info({ userId: maybePerson.userId }, 'signed out');
      }
      response.clearCookie(cookieName(context.config), { path: '/' });
      takeTokenBack(response);
      return { done: true };
    },

    changePassword: async ({ body, person, http: { request, response } }) => {
      const { epoch } = await changePassword(context, person, body);
      // A raised epoch voids every session, also this one: it starts anew at once.
      await logIn(request, { id: person.userId, epoch });
      giveToken(context.config, request, response);
      return { done: true };
    },

    listUsers: async () => ({ users: await listUsers() }),
    addUser: ({ body, person }) => addUser(context, person, body),
    changeUser: ({ params, body, person }) => changeUser(context, person, params.userId, body),
    resetPassword: ({ params, body, person }) =>
      resetPassword(context, person, params.userId, body),
  };
}

async function meOf(context: Context, person: SignedIn): Promise<NonNullable<MaybeMe['me']>> {
  const user = await UserRecord.findByPk(person.userId);
  if (!user) throw new Refusal('not-signed-in', 'Sign in first.');
  return {
    user: toUserDto(user),
    storm: await openStorm(),
    region: context.region.dto,
    settings: await readSettings(context.sequelize),
    serverNow: context.clock(),
    ...(context.config.isDemo ? { isDemo: true } : {}),
  };
}

const logIn = (request: Request, user: Express.User): Promise<void> =>
  byCallback((done) => request.logIn(user, done));
