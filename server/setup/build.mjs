/** `npm run build`: installs what is missing and builds the server and the client into dist/. */
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { runMain } from './problem.mjs';
import { ensureBuild } from './product-build.mjs';
import { stepPrinter } from './steps.mjs';

await runMain(async () => {
  ensureNode();
  const { step } = stepPrinter();
  await step('packages', ensurePackages);
  await step('build', ensureBuild);
});
