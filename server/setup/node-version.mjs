import { SetupProblem } from './problem.mjs';

/** As package.json's "engines"; npm only warns about it. */
const OLDEST = [20, 19];

/** Stops with a sentence on a Node.js that is too old for the packages. */
export function ensureNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major > OLDEST[0] || (major === OLDEST[0] && minor >= OLDEST[1]))
    return `Node.js ${process.versions.node}`;
  throw new SetupProblem(
    `Node.js ${process.versions.node} is too old: install ${OLDEST.join('.')} or newer (nodejs.org), then try again.`,
  );
}
