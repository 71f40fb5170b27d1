import { readdirSync } from 'node:fs';
import path from 'node:path';
import type { Sequelize } from 'sequelize';
import { migrate, unmigrate } from '../../server/db/migrate';
import { select } from '../../server/db/sql';
import { freshDatabase } from '../support/database';

let sequelize: Sequelize;
beforeAll(async () => (sequelize = await freshDatabase()));
afterAll(() => sequelize.close());

const tables = async () =>
  (
    await select<{ name: string }>(
      sequelize,
      'SELECT table_name AS name FROM information_schema.tables WHERE table_schema = DATABASE() ORDER BY 1',
    )
  ).map((row) => row.name);

describe('the migrations', () => {
  it('go down to nothing and up again to the same tables', async () => {
    const before = await tables();
    await unmigrate(sequelize);
    expect(await tables()).toEqual(['migrations']);
    await migrate(sequelize);
    expect(await tables()).toEqual(before);
  });

  it('run once when two processes start at the same moment', async () => {
    await unmigrate(sequelize);
    const applied = await Promise.all([migrate(sequelize), migrate(sequelize)]);
    expect(applied.map((names) => names.length).sort((a, b) => a - b)).toEqual([
      0,
      readdirSync(path.resolve('server/db/migrations')).length,
    ]);
  });
});
