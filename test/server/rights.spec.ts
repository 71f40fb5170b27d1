import { randomUUID } from 'node:crypto';
import { Validator } from '@seriousme/openapi-schema-validator';
import request from 'supertest';
import { ROLES, type Role } from '@shared/contract/common';
import { HTTP, type RouteSpec } from '@shared/contract/http';
import { PATHS, type RouteName } from '@shared/contract/paths';
import { startServer, type TestPerson, type TestServer } from '../support/server';

let server: TestServer;
const people = new Map<Role, TestPerson>();
beforeAll(async () => {
  server = await startServer();
  for (const role of ROLES) people.set(role, await server.signIn(role));
});
afterAll(() => server.close());

const names = Object.keys(PATHS) as RouteName[];
const paramsFor = (name: RouteName): Record<string, string> =>
  Object.fromEntries(
    [...PATHS[name][1].matchAll(/:(\w+)/g)].map(([, key]) => [key ?? '', randomUUID()]),
  );
/** Signing out and a new password would end the sessions that this table is made of. */
const ENDS_SESSION: readonly RouteName[] = ['signOut', 'changePassword'];

describe.each(names)('%s', (name) => {
  const spec: RouteSpec = HTTP[name];

  it('lets in whom the contract names, and nobody else', async () => {
    for (const role of ROLES) {
      const isMeant = spec.who === 'anyone' || spec.who.includes(role);
      if (isMeant && ENDS_SESSION.includes(name)) continue;
      // Nothing fits, so that whoever is let in is refused for another reason and changes nothing.
      const { status, body } = await (people.get(role) as TestPerson).call(name, {
        params: paramsFor(name),
        ...(typeof spec.body === 'object' ? { body: {} } : {}),
      });
      const isRefused = (body as { type?: string }).type === '/problems/not-allowed';
      expect([role, isRefused, status === 403]).toEqual([role, !isMeant, !isMeant]);
    }
  });

  if (spec.who !== 'anyone')
    it('asks a stranger to sign in', async () => {
      const [method, path] = PATHS[name];
      const url = path.replace(/:\w+/g, randomUUID());
      const verb = method.toLowerCase() as 'get' | 'post' | 'patch' | 'delete';
      const reply = await request(server.url)[verb](url).set('Origin', 'http://localhost:4310');
      expect(reply.status).toBe(401);
    });

  if (typeof spec.body === 'object')
    it.each([
      ['an array', []],
      ['nothing that fits', { commandId: 7 }],
      ['a polluted prototype', JSON.parse('{"__proto__":{"x":1},"constructor":1}') as object],
    ])('refuses %s with a problem that names the fields', async (_what, body) => {
      const role = spec.who === 'anyone' ? 'dispatcher' : (spec.who[0] as Role);
      const reply = await (people.get(role) as TestPerson).call(name, {
        params: paramsFor(name),
        body,
      });
      expect([reply.status, reply.type]).toEqual([422, 'application/problem+json']);
      expect((reply.body as { errors: unknown[] }).errors.length).toBeGreaterThan(0);
    });
});

it('an id that is no id is refused, not searched for', async () => {
  const reply = await (people.get('dispatcher') as TestPerson).call('readCall', {
    params: { callId: "1'--" },
  });
  expect(reply.status).toBe(422);
});

it('a malformed body is a problem of the sender, not of ours', async () => {
  const mara = people.get('dispatcher') as TestPerson;
  const reply = await mara
    .call('takeCall', { params: { stormId: server.stormId } })
    .type('json')
    .send('{"name": ');
  expect([reply.status, reply.type]).toEqual([400, 'application/problem+json']);
});

describe('/api/openapi.json', () => {
  it('is a valid OpenAPI 3.1 document that describes every route', async () => {
    const { body } = await request(server.url).get('/api/openapi.json');
    const checked = await new Validator().validate(body as Record<string, unknown>);
    expect(checked.errors ?? []).toEqual([]);
    expect(checked.valid).toBe(true);
    const operations = Object.values((body as { paths: object }).paths).flatMap((item: object) =>
      Object.values(item).map((one: { operationId: string }) => one.operationId),
    );
    expect(operations.sort()).toEqual([...names].sort());
  });
});
