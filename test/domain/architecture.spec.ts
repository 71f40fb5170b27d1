import { execFileSync, spawnSync } from 'node:child_process';
import { cpSync, mkdirSync, mkdtempSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';

import { RuleTester } from 'eslint';

const root = path.resolve(__dirname, '../..');

/** Each rule of test/dependencies.cjs with a file that breaks it, and nothing else that it breaks. */
const WRONG: readonly { rule: string; file: string; text: string }[] = [
  { rule: 'domain-is-alone', file: 'shared/domain/zod-in-rule.ts', text: "import 'zod';" },
  { rule: 'domain-is-alone', file: 'shared/domain/node-in-rule.ts', text: "import 'node:fs';" },
  {
    rule: 'domain-is-alone',
    file: 'shared/domain/contract-in-rule.ts',
    text: "import type { CallDto } from '../contract/calls'; export type T = CallDto;",
  },
  {
    rule: 'phone-numbers-have-their-library',
    file: 'shared/domain/phone-number.ts',
    text: "import 'libphonenumber-js'; import 'zod';",
  },
  { rule: 'contract-is-schemas', file: 'shared/contract/clock.ts', text: "import 'luxon';" },
  {
    rule: 'server-knows-no-screen',
    file: 'server/calls/screen.ts',
    text: "import '../../src/app/row';",
  },
  {
    rule: 'server-calls-no-socket',
    file: 'server/calls/caller.ts',
    text: "import 'socket.io-client';",
  },
  {
    rule: 'screen-knows-no-server',
    file: 'src/app/pool.ts',
    text: "import '../../server/calls/take-call';",
  },
  { rule: 'screen-uses-no-node', file: 'src/app/disk.ts', text: "import 'node:fs';" },
  {
    rule: 'screen-takes-types-of-the-contract',
    file: 'src/app/schema.ts',
    text: "import { CallDto } from '@shared/contract/calls'; export const c = CallDto;",
  },
  {
    rule: 'only-routes-know-http',
    file: 'server/calls/http-in-command.ts',
    text: "import 'express';",
  },
  {
    rule: 'only-realtime-knows-sockets',
    file: 'server/calls/socket.ts',
    text: "import 'socket.io';",
  },
  {
    rule: 'only-the-fake-and-the-sender-know-the-text-service',
    file: 'server/calls/twilio.ts',
    text: "import 'twilio';",
  },
  {
    rule: 'no-circle',
    file: 'server/calls/egg.ts',
    text: "import { hen } from './hen'; export const egg = () => hen;",
  },
  { rule: 'resolvable', file: 'server/calls/nowhere.ts', text: "import './not-there';" },
  { rule: 'product-has-its-packages', file: 'server/calls/tool.ts', text: "import 'esbuild';" },
];

/** What the rules must let pass; the wrong files also lean on these. */
const RIGHT: Readonly<Record<string, string>> = {
  'shared/domain/call.ts': "import './urgency/urgency';",
  'shared/domain/urgency/urgency.ts': 'export const urgency = 1;',
  'shared/contract/calls.ts':
    "import { z } from 'zod'; import '../domain/call'; export const CallDto = z.string(); export type CallDto = string;",
  'shared/contract/paths.ts': 'export const PATHS = {};',
  'server/calls/take-call.ts': "import '@shared/domain/call'; import '@shared/contract/calls';",
  'server/calls/hen.ts': "import { egg } from './egg'; export const hen = () => egg;",
  'server/calls/call-routes.ts': "import 'express'; import './take-call';",
  'server/realtime/board.ts': "import 'socket.io';",
  'server/drill-program/person.ts': "import 'socket.io-client';",
  'server/texts/send-text.ts': "import 'twilio';",
  'src/app/row.ts':
    "import '@shared/domain/call'; import type { CallDto } from '@shared/contract/calls'; import { PATHS } from '@shared/contract/paths'; export type T = CallDto; export const p = PATHS;",
};

describe('the dependency rules', () => {
  let place: string;
  let found: { rule: string; from: string }[];

  beforeAll(() => {
    place = mkdtempSync(path.join(os.tmpdir(), 'thawline-layers-'));
    for (const file of [
      'package.json',
      'tsconfig.json',
      'test/tsconfig.json',
      'test/dependencies.cjs',
    ]) {
      cpSync(path.join(root, file), path.join(place, file));
    }
    symlinkSync(path.join(root, 'node_modules'), path.join(place, 'node_modules'));
    const texts = { ...RIGHT, ...Object.fromEntries(WRONG.map(({ file, text }) => [file, text])) };
    for (const [file, text] of Object.entries(texts)) {
      mkdirSync(path.dirname(path.join(place, file)), { recursive: true });
      writeFileSync(path.join(place, file), text);
    }
    found = violations();
  });

  afterAll(() => rmSync(place, { recursive: true, force: true }));

  it.each(WRONG)('catch $file by $rule', ({ rule, file }) => {
    expect(found).toContainEqual({ rule, from: file });
  });

  it('let pass what the layers allow', () => {
    // The egg's circle runs through the hen.
    const right = Object.keys(RIGHT).filter((file) => file !== 'server/calls/hen.ts');

    expect(found.filter(({ from }) => right.includes(from))).toEqual([]);
  });

  it('have a planted breach each, so that none is dead', () => {
    const config = execFileSync(
      process.execPath,
      [
        '-p',
        "JSON.stringify(require('./test/dependencies.cjs').forbidden.filter((r) => r.severity === 'error').map((r) => r.name))",
      ],
      { cwd: root, encoding: 'utf8' },
    );

    expect(new Set(JSON.parse(config) as string[])).toEqual(new Set(WRONG.map(({ rule }) => rule)));
  });

  function violations(): { rule: string; from: string }[] {
    const program = path.join(root, 'node_modules/dependency-cruiser/bin/dependency-cruise.mjs');
    const { stdout } = spawnSync(
      process.execPath,
      [
        program,
        '--config',
        'test/dependencies.cjs',
        '--output-type',
        'json',
        'shared',
        'server',
        'src',
      ],
      { cwd: place, encoding: 'utf8', maxBuffer: 64 * 1024 * 1024 },
    );
    const report = JSON.parse(stdout) as {
      summary: { violations: { from: string; rule: { name: string } }[] };
    };
    return report.summary.violations.map(({ from, rule }) => ({ rule: rule.name, from }));
  }
});

// RuleTester makes its own `describe` and `it`.
new RuleTester().run(
  'raw queries pass their type',
  jest.requireActual<Parameters<RuleTester['run']>[1]>('../eslint-rules/no-untyped-query.cjs'),
  {
    valid: [
      'sequelize.query(sql, { type: QueryTypes.SELECT })',
      'context.sequelize.query(sql, { replacements: [], type })',
      'params.query(sql)',
    ],
    invalid: [
      { code: 'sequelize.query(sql)', errors: [{ messageId: 'untyped' }] },
      {
        code: 'context.sequelize.query(sql, { replacements: [] })',
        errors: [{ messageId: 'untyped' }],
      },
      { code: 'schema.sequelize.query(sql, options)', errors: [{ messageId: 'untyped' }] },
    ],
  },
);
