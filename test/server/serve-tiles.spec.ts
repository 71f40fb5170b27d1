import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import express from 'express';
import request from 'supertest';
import { tileRoutes } from '../../server/region/serve-tiles';
import { temporaryFolder } from '../support/region-files';

const tiles = temporaryFolder();
const TILE = gzipSync(Buffer.from('what a tile holds'));
const app = express().use('/tiles', tileRoutes(tiles.path));
const PATH = '/tiles/skerry-0011aa/14/4801/6403.pbf';

beforeAll(() => {
  const folder = join(tiles.path, 'skerry-0011aa', '14', '4801');
  mkdirSync(folder, { recursive: true });
  writeFileSync(join(folder, '6403.pbf'), TILE);
});
afterAll(() => tiles.remove());

describe('a tile', () => {
  it('may be kept for good, by its address alone', async () => {
    const { status, headers } = await request(app).get(PATH);
    expect(status).toBe(200);
    expect(headers).toMatchObject({
      'cache-control': 'public, max-age=31536000, immutable',
      'content-encoding': 'gzip',
      'content-type': 'application/x-protobuf',
      'content-length': String(TILE.length),
    });
    expect(headers['etag']).toMatch(/^W?\/?".+"$/);
    expect(headers).not.toHaveProperty('set-cookie');
    expect(headers['vary'] ?? '').not.toContain('*');
  });

  it('is not sent again to who has it', async () => {
    const etag = (await request(app).get(PATH)).headers['etag'] ?? '';
    const again = await request(app).get(PATH).set('If-None-Match', etag);
    expect([again.status, again.text]).toEqual([304, '']);
  });

  it('comes whole, whatever part of it is asked for: caches refuse to keep parts', async () => {
    const { status, headers } = await request(app).get(PATH).set('Range', 'bytes=0-3');
    expect(status).toBe(200);
    expect(headers).not.toHaveProperty('content-range');
    expect(headers['accept-ranges'] ?? 'none').toBe('none');
  });

  it('that does not exist is empty ground for a day, and can be kept too', async () => {
    const { status, headers } = await request(app).get('/tiles/skerry-0011aa/14/1/1.pbf');
    expect(status).toBe(204);
    expect(headers['cache-control']).toBe('public, max-age=86400');
  });
});
