import os from 'node:os';
import type { Config } from '../../server/config';

/** Where the pages of the tests' servers come from, wherever the servers listen. */
export const ORIGIN = 'http://localhost:4310';

/** The configuration of every server of the tests. */
export const testConfig = (database: Config['database']): Config => ({
  environment: 'test',
  logLevel: 'silent',
  http: { host: '127.0.0.1', port: 0, publicUrl: ORIGIN, trustProxyHops: 0 },
  database,
  sessionSecret: 'a session secret that is long enough for a test 0123456789',
  texts: {
    account: `AC${'0'.repeat(32)}`,
    token: 'a token for the fake text service',
    baseUrl: null,
    from: '+12525550100',
  },
  dataFolder: os.tmpdir(),
  tilesFolder: os.tmpdir(),
  regionFilesFolder: os.tmpdir(),
  mostRegionUploadBytes: 5_000_000,
  clientFolder: os.tmpdir(),
  regionZone: 'America/New_York',
  defaultAreaCode: '252',
  isDemo: false,
});
