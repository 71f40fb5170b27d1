import { Sequelize } from 'sequelize';
import type { Config } from '../config';
import { registerRecords } from './records';
import { mariadbModule } from './mariadb-module';

/** Opens the pool and registers every record. Nothing is read or written yet. */
export function connect(database: Config['database']): Sequelize {
  const sequelize = new Sequelize({
    dialect: 'mariadb',
    dialectModule: mariadbModule,
    host: database.host,
    port: database.port,
    username: database.user,
    password: database.password,
    database: database.name,
    // Only an offset is safe here: a named zone is frozen to one when the connection opens.
    timezone: '+00:00',
    logging: false,
    define: { underscored: true, timestamps: false },
    // Short waits: a request that finds no connection is told so, instead of piling up.
    pool: { max: 12, min: 1, acquire: 4000, idle: 30_000 },
    dialectOptions: {
      connectTimeout: 3000,
      // Commands lock the rows that they decide about and then want them as they are. Set once for
      // the connection, it costs no round trip for each command.
      initSql: 'SET SESSION TRANSACTION ISOLATION LEVEL READ COMMITTED',
    },
  });
  registerRecords(sequelize);
  return sequelize;
}
