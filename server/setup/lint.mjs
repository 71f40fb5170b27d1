/** `npm run lint`: format, types, direction of imports, lint. Runs all, shows what is wrong, then says how many. */
import { CHECKS, runCheck } from './checks.mjs';
import { ensureNode } from './node-version.mjs';
import { ensurePackages } from './packages.mjs';
import { runMain } from './problem.mjs';
import { stepPrinter } from './steps.mjs';

await runMain(async () => {
  ensureNode();
  const { say, step } = stepPrinter();
  await step('packages', ensurePackages);

  let failed = 0;
  for (const check of CHECKS) {
    const { name, passed, output, seconds } = await runCheck(check);
    say(`${name.padEnd(20)} ${passed ? 'passed' : 'FAILED'}  ${seconds.toFixed(1)} s`);
    if (passed) continue;
    failed++;
    process.stdout.write(`${output}\n`);
  }
  say(`${CHECKS.length - failed} passed, ${failed} failed`);
  return failed ? 1 : 0;
});
