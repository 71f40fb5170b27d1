import path from 'node:path';

import { root } from './paths.mjs';
import { run } from './run.mjs';

const bin = (...parts) => path.join(root, 'node_modules', ...parts);
const TSC = bin('typescript', 'bin', 'tsc');

/** What is checked without running the product, each with how to run it: Node.js and these arguments. */
export const CHECKS = [
  {
    name: 'format',
    args: [bin('prettier', 'bin', 'prettier.cjs'), '--check', '--log-level', 'warn', '.'],
  },
  { name: 'types: shared', args: [TSC, '-p', 'shared/tsconfig.json'] },
  {
    name: 'directions',
    args: [
      bin('dependency-cruiser', 'bin', 'dependency-cruise.mjs'),
      ...[
        '--config',
        'test/dependencies.cjs',
        '--output-type',
        'err',
        'server',
        'shared',
        'src',
        'test',
      ],
    ],
  },
  // The build of the client looks at the types of its templates besides.
  { name: 'types and lint', args: [path.join(root, 'server', 'setup', 'types-and-lint.mjs')] },
];

/** Runs one check. */
export async function runCheck({ name, args }) {
  const start = performance.now();
  const { code, output } = await run(process.execPath, args, { env: { NO_COLOR: '1' } });
  return { name, passed: code === 0, output, seconds: (performance.now() - start) / 1000 };
}
