/**
 * Something the person at the keyboard can put right. The message is one or two sentences that
 * name the trouble and the remedy; it is shown without a stack.
 */
export class SetupProblem extends Error {}

/** Turns the errors of a folder that cannot be written into a sentence; passes others on. */
export function explainFileError(error, folder) {
  if (error.code === 'EACCES' || error.code === 'EPERM' || error.code === 'EROFS') {
    return new SetupProblem(
      `${folder} cannot be written by this user. Make the folder writable, or set THAWLINE_DATA_FOLDER to one that is.`,
    );
  }
  if (error.code === 'ENOSPC') {
    return new SetupProblem(
      `The disk that holds ${folder} is full. Free some space, then try again.`,
    );
  }
  return error;
}

/** Runs a script's main function and ends the process: problems as a sentence, faults as a stack. */
export async function runMain(main) {
  try {
    process.exitCode = (await main()) ?? process.exitCode ?? 0;
  } catch (error) {
    const text = error instanceof SetupProblem ? error.message : error.stack;
    process.stderr.write(`\n${text}\n`);
    process.exitCode = 1;
  }
}
