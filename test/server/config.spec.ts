import path from 'node:path';

import { InvalidConfig, readConfig } from '../../server/config';

const SECRET = '3f9a1c5be07d2846a9b1c3d5e7f90214b6d8fa0c2e4a6b8d0f1e3c5a7b9d1f30';

/** The least that a server can start with. */
const least = {
  THAWLINE_DB_PASSWORD: SECRET.slice(0, 24),
  THAWLINE_SESSION_SECRET: SECRET,
  THAWLINE_TEXT_ACCOUNT: `AC${SECRET.slice(0, 32)}`,
  THAWLINE_TEXT_TOKEN: SECRET.slice(8, 40),
  THAWLINE_TEXT_FROM: '+12015550100',
};

const complaint = (env: Record<string, string | undefined>): string => {
  try {
    readConfig(env);
  } catch (error) {
    if (error instanceof InvalidConfig) return error.message;
    throw error;
  }
  return 'no complaint';
};

describe('readConfig', () => {
  it('starts with the five secrets alone, closed to the network and without demo data', () => {
    expect(readConfig(least)).toEqual({
      environment: 'production',
      logLevel: 'info',
      http: {
        host: '127.0.0.1',
        port: 4310,
        publicUrl: 'http://localhost:4310',
        trustProxyHops: 0,
      },
      database: {
        host: '127.0.0.1',
        port: 3316,
        user: 'thawline',
        password: least.THAWLINE_DB_PASSWORD,
        name: 'thawline',
      },
      sessionSecret: SECRET,
      texts: {
        account: least.THAWLINE_TEXT_ACCOUNT,
        token: least.THAWLINE_TEXT_TOKEN,
        baseUrl: null,
        from: '+12015550100',
      },
      dataFolder: path.resolve('.data'),
      tilesFolder: path.resolve('tiles'),
      regionFilesFolder: path.resolve('.data/region-files'),
      mostRegionUploadBytes: 2_000_000_000,
      clientFolder: path.resolve('dist/client'),
      regionZone: 'America/New_York',
      defaultAreaCode: '252',
      isDemo: false,
    });
  });

  it('names every wrong and every missing variable in one sentence', () => {
    const said = complaint({ ...least, THAWLINE_PORT: 'http', THAWLINE_SESSION_SECRET: undefined });

    expect(said).toContain('THAWLINE_PORT must be a whole number from 1 to 65535');
    expect(said).toContain('THAWLINE_SESSION_SECRET is not set');
    expect(said.split('\n')).toHaveLength(1);
  });

  it('counts an empty variable as not set, as compose files write them', () => {
    expect(readConfig({ ...least, THAWLINE_TEXT_BASE_URL: ' ' }).texts.baseUrl).toBeNull();
    expect(complaint({ ...least, THAWLINE_TEXT_TOKEN: '' })).toContain(
      'THAWLINE_TEXT_TOKEN is not set',
    );
  });

  it.each([
    ['THAWLINE_SESSION_SECRET', 'change-me-please-change-me-please-change-me'],
    ['THAWLINE_SESSION_SECRET', 'a'.repeat(64)],
    ['THAWLINE_SESSION_SECRET', SECRET.slice(0, 31)],
    ['THAWLINE_DB_PASSWORD', 'thawline-password'],
    ['THAWLINE_TEXT_TOKEN', '<your token from the console>'],
    ['THAWLINE_TEXT_ACCOUNT', 'AC123'],
    ['THAWLINE_TEXT_FROM', '201-555-0100'],
    ['THAWLINE_PORT', '0'],
    ['THAWLINE_PORT', '70000'],
    ['THAWLINE_PORT', '1e3'],
    ['THAWLINE_PUBLIC_URL', 'localhost:4310'],
    ['THAWLINE_TEXT_BASE_URL', 'ftp://127.0.0.1'],
    ['THAWLINE_DB_NAME', 'thawline; DROP DATABASE'],
    ['THAWLINE_REGION_ZONE', 'Atlantis/Capital'],
    ['THAWLINE_REGION_ZONE', '-05:00'],
    ['THAWLINE_AREA_CODE', '123'],
    ['THAWLINE_DEMO', 'true'],
    ['THAWLINE_ENVIRONMENT', 'live'],
    ['THAWLINE_LOG_LEVEL', 'loud'],
    ['THAWLINE_TRUST_PROXY_HOPS', '-1'],
  ])('refuses %s=%s and never repeats the value', (name, value) => {
    const said = complaint({ ...least, [name]: value });

    expect(said).toContain(`${name} `);
    expect(said).not.toContain(value);
  });

  it('refuses to serve people in the clear across a network, but not on this machine', () => {
    const across = { ...least, THAWLINE_PUBLIC_URL: 'http://board.example.com' };

    expect(complaint(across)).toContain('THAWLINE_PUBLIC_URL must be an https address');
    expect(complaint({ ...across, THAWLINE_ENVIRONMENT: 'development' })).toBe('no complaint');
    expect(complaint({ ...least, THAWLINE_PUBLIC_URL: 'http://127.0.0.1:9' })).toBe('no complaint');
  });

  it('takes the slash off the end of an address, so that paths can be added', () => {
    const { http } = readConfig({ ...least, THAWLINE_PUBLIC_URL: 'https://board.example.com/' });

    expect(http.publicUrl).toBe('https://board.example.com');
  });
});
