import { stripVTControlCharacters } from 'node:util';

import { SetupProblem } from './problem.mjs';

const PARTS = ['checks', 'domain', 'client', 'build', 'server', 'browser'];
const SHOWN_FAILURES = 30;
const LINES_EACH = 30;

/** Reads the command line: which parts, and which spec files. */
export function wantedParts(args) {
  const only = args.find((arg) => arg.startsWith('--only='))?.slice('--only='.length);
  const unknownFlag = args.find((arg) => arg.startsWith('-') && !arg.startsWith('--only='));
  if (unknownFlag)
    throw new SetupProblem(`${unknownFlag} is not known; there is --only=${PARTS.join(',')}`);
  const names = only ? only.split(',') : PARTS;
  const wrong = names.filter((name) => !PARTS.includes(name));
  if (wrong.length > 0) {
    throw new SetupProblem(
      `There is no part ${wrong.join(', ')}; the parts are ${PARTS.join(', ')}.`,
    );
  }
  return { parts: new Set(names), pattern: args.find((arg) => !arg.startsWith('-')) };
}

/** Each failure in words, cut to what helps. */
export function describeFailures(results) {
  const all = results.flatMap(({ name, details }) => details.map((text) => ({ name, text })));
  const shown = all.slice(0, SHOWN_FAILURES).map(({ name, text }) => {
    const lines = stripVTControlCharacters(text).trimEnd().split('\n');
    const cut =
      lines.length > LINES_EACH
        ? [...lines.slice(0, LINES_EACH), `… ${lines.length - LINES_EACH} more lines`]
        : lines;
    return `\n── ${name} ──\n${cut.join('\n')}`;
  });
  if (all.length > SHOWN_FAILURES)
    shown.push(`\n… and ${all.length - SHOWN_FAILURES} more failures`);
  return shown.join('\n');
}

/** One row a part; the last line counts everything. */
export function summary(results) {
  const row = (name, passed, failed, skipped, seconds) =>
    `${name.padEnd(20)}${String(passed).padStart(8)}${String(failed).padStart(8)}${String(skipped).padStart(9)}${seconds.padStart(10)}`;
  const sum = (key) => results.reduce((total, result) => total + result[key], 0);
  const [passed, failed, skipped] = [sum('passed'), sum('failed'), sum('skipped')];
  return [
    '',
    row('part', 'passed', 'failed', 'skipped', 'seconds'),
    ...results.map((r) => row(r.name, r.passed, r.failed, r.skipped, r.seconds.toFixed(1))),
    '',
    `${passed} passed, ${failed} failed${skipped ? `, ${skipped} skipped` : ''}`,
  ].join('\n');
}
