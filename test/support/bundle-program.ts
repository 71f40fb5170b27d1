import path from 'node:path';
import { build } from 'esbuild';

const ROOT = path.resolve(__dirname, '../..');

/**
 * Bundles a program that a test starts, and kills, many times. With its packages inside it starts in two
 * thirds of the time: thousands of files need not be looked for.
 *
 * @param entry the source, from the root of the repository
 * @param outfile inside the repository, so that the bundle finds what stays outside
 */
export async function bundleProgram(entry: string, outfile: string): Promise<void> {
  await build({
    entryPoints: [path.join(ROOT, entry)],
    outfile,
    bundle: true,
    platform: 'node',
    target: 'node20',
    // Machine code, and what the database library asks for only with another database.
    external: ['@node-rs/argon2', 'pg-hstore'],
    tsconfig: path.join(ROOT, 'tsconfig.json'),
    logLevel: 'error',
  });
}
