import { findProgram, installPackages } from './debian.mjs';
import { SetupProblem } from './problem.mjs';

/**
 * The browser for the browser stories: THAWLINE_CHROMIUM if set, else Debian's, installed when missing.
 *
 * @returns the program's full path
 */
export async function ensureChromium(tell = () => {}) {
  if (process.env.THAWLINE_CHROMIUM) return process.env.THAWLINE_CHROMIUM;
  const names = ['chromium', 'chromium-browser', 'google-chrome'];
  const found = await findProgram(...names);
  if (found) return found;
  tell('installing Chromium from Debian packages');
  await installPackages('Chromium', ['chromium']);
  const installed = await findProgram(...names);
  if (!installed)
    throw new SetupProblem('Chromium was installed, but the program is not to be found.');
  return installed;
}
