import connectSequelize from 'connect-session-sequelize';
import type { RequestHandler } from 'express';
import session, { type SessionData } from 'express-session';
import { DataTypes, type Model, type Sequelize } from 'sequelize';
import type { Config } from '../config';

export const SESSION_HOURS = 12;

/** The session's cookie; `__Host-` binds it to this very host, and needs https. */
export const cookieName = (config: Config): string =>
  config.http.publicUrl.startsWith('https:') ? '__Host-thawline' : 'thawline';

/** Sessions in the database, at most 12 hours long, however busily they are used. */
export function sessions(config: Config, sequelize: Sequelize): RequestHandler & { stop(): void } {
  const table = sequelize.define(
    'Session',
    {
      sid: { type: DataTypes.STRING(128), primaryKey: true },
      expires: DataTypes.DATE(3),
      data: DataTypes.TEXT,
    },
    { tableName: 'sessions', timestamps: true },
  );
  const store = new CheckedStore(table, {
    db: sequelize,
    table: 'Session',
    checkExpirationInterval: 15 * 60_000,
    expiration: SESSION_HOURS * 3_600_000,
  });
  const handler = session({
    name: cookieName(config),
    secret: config.sessionSecret,
    store,
    resave: false,
    saveUninitialized: false,
    proxy: config.http.trustProxyHops > 0,
    cookie: {
      httpOnly: true,
      sameSite: 'lax',
      secure: config.http.publicUrl.startsWith('https:'),
      path: '/',
      maxAge: SESSION_HOURS * 3_600_000,
    },
  });
  return Object.assign(handler, { stop: () => store.stopExpiringSessions() });
}

const SequelizeStore = connectSequelize(session.Store);

/** The library takes any row it finds; only its sweeper looks at the time. This looks at once. */
class CheckedStore extends SequelizeStore {
  constructor(
    private readonly table: ReturnType<Sequelize['define']>,
    options: ConstructorParameters<typeof SequelizeStore>[0],
  ) {
    super(options);
  }

  override get = (
    sid: string,
    answer: (error: unknown, session?: SessionData | null) => void,
  ): void => {
    this.table
      .findByPk(sid)
      .then((found) => {
        const row = found as (Model & { expires: Date; data: string }) | null;
        const isAlive = row !== null && row.expires.getTime() > Date.now();
        answer(null, isAlive ? (JSON.parse(row.data) as SessionData) : null);
      })
      .catch((error: unknown) => answer(error));
  };
  /** Nothing is written on a mere read: a slow request must not bring an ended session back. */
  override touch = (_sid: string, _session: unknown, done?: (error: unknown) => void): void =>
    done?.(null);
}
