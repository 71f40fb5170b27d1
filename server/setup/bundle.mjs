import { root } from './paths.mjs';
import { SetupProblem } from './problem.mjs';

/**
 * Bundles TypeScript programs into one CommonJS file each, flat in `outdir`. Packages stay outside,
 * in node_modules; `@shared/…` is resolved by the tsconfig. It does not check types: lint does.
 */
export async function bundle(entries, outdir) {
  // Imported here and not above: this module is loaded before the packages are installed.
  const { build, stop } = await import('esbuild');
  try {
    await build({
      absWorkingDir: root,
      entryPoints: entries,
      entryNames: '[name]',
      outdir,
      bundle: true,
      packages: 'external',
      platform: 'node',
      format: 'cjs',
      target: 'node20',
      sourcemap: true,
      tsconfig: 'tsconfig.json',
      logLevel: 'silent',
    });
  } catch (error) {
    if (!error.errors) throw error;
    const faults = error.errors.map(({ text, location }) =>
      location ? `${location.file}:${location.line}: ${text}` : text,
    );
    throw new SetupProblem(`The server does not build:\n${faults.join('\n')}`);
  } finally {
    // esbuild's helper process would keep the folder in use as long as this script runs.
    await stop();
  }
}
