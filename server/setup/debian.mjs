import { access, constants } from 'node:fs/promises';
import path from 'node:path';

import { SetupProblem } from './problem.mjs';
import { lastLines, run } from './run.mjs';

/** Where Debian puts programs; a user's PATH often leaves out the sbin folders. */
const FOLDERS = [...new Set([...(process.env.PATH ?? '').split(':'), '/usr/sbin', '/usr/bin'])];

/** The full path of an installed program, or null. */
export async function findProgram(...names) {
  for (const name of names) {
    for (const folder of FOLDERS.filter(Boolean)) {
      const file = path.join(folder, name);
      try {
        await access(file, constants.X_OK);
        return file;
      } catch {
        // Not in this folder: look in the next.
      }
    }
  }
  return null;
}

/**
 * Installs Debian packages. Only root can; anybody else is told what to type.
 *
 * @param what the thing in plain words, for the message
 */
export async function installPackages(what, packages) {
  const remedy = `apt-get install ${packages.join(' ')}`;
  if (process.getuid?.() !== 0) {
    throw new SetupProblem(
      `${what} is not installed, and only root may install it. Run "sudo ${remedy}", then try again.`,
    );
  }
  if (!(await findProgram('apt-get'))) {
    throw new SetupProblem(
      `${what} is not installed, and this is not Debian. Install it with your system's package manager, then try again.`,
    );
  }
  const env = { DEBIAN_FRONTEND: 'noninteractive', LC_ALL: 'C' };
  const install = () =>
    run('apt-get', ['install', '-y', '--no-install-recommends', ...packages], { env });

  // A machine with stale or no package lists needs the update first; one with fresh lists is spared it.
  let result = await install();
  if (result.code !== 0) {
    await run('apt-get', ['update'], { env });
    result = await install();
  }
  if (result.code !== 0) {
    throw new SetupProblem(
      `${what} could not be installed. Check the network and run "${remedy}" by hand; it said:\n${lastLines(result.output, 8)}`,
    );
  }
}
