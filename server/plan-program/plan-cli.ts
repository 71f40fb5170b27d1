import { once } from 'node:events';
import { parseArgs } from 'node:util';
import { answerProblem, BadProblem, type Asked } from './answer-problem';
import { MOST_BYTES, readAll, readLines } from './read-lines';
import { warmUp } from './warm-up';

const HELP = `Plans routes: reads a problem as JSON from standard input, writes the plan as one line of JSON.

  --stream          one problem per line in, one plan per line out, in order, until the input ends
  --seconds N       time for each plan (default: the problem's budgetMs, else 1 s)
  --seed N          start of the random numbers (default: the problem's seed, else 1)
  --iterations N    rounds of search instead of a time; the same problem then gives the same plan
  --explain         says why each stop is where it is, and what would change for a call on no route
`;

const EXIT_BAD_PROBLEM = 2;
/** sysexits.h: EX_USAGE. */
const EXIT_USAGE = 64;

class Usage extends Error {}

/** Runs the program on this process's own input and output. @returns the exit code */
export async function planProgram(args: readonly string[]): Promise<number> {
  // Whoever read the plans has gone: nobody is left to be told anything.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code === 'EPIPE') process.exit(0);
    throw error;
  });
  try {
    const { stream, help, ...asked } = readArgs(args);
    if (help) {
      process.stdout.write(HELP);
      return 0;
    }
    return stream ? await answerStream(asked) : await answerOne(asked);
  } catch (error) {
    if (error instanceof BadProblem) return complain(error.message, EXIT_BAD_PROBLEM);
    if (error instanceof Usage) return complain(error.message, EXIT_USAGE);
    throw error;
  }
}

function readArgs(args: readonly string[]): Asked & { stream: boolean; help: boolean } {
  let values;
  try {
    ({ values } = parseArgs({
      args: [...args],
      options: {
        stream: { type: 'boolean', default: false },
        explain: { type: 'boolean', default: false },
        seconds: { type: 'string' },
        seed: { type: 'string' },
        iterations: { type: 'string' },
        help: { type: 'boolean', default: false },
      },
    }));
  } catch (error) {
    throw new Usage(`${(error as Error).message.split('\n')[0]} See --help.`);
  }
  const { seconds, seed, iterations, ...flags } = values;
  return {
    ...flags,
    ...number('seconds', seconds, (value) => value >= 0),
    ...number('seed', seed, Number.isSafeInteger),
    ...number('iterations', iterations, (value) => Number.isSafeInteger(value) && value >= 0),
  };
}

function number<Name extends string>(
  name: Name,
  text: string | undefined,
  isAllowed: (value: number) => boolean,
): Partial<Record<Name, number>> {
  if (text === undefined) return {};
  const value = Number(text);
  if (text.trim() === '' || !Number.isFinite(value) || !isAllowed(value)) {
    throw new Usage(`--${name}: ${JSON.stringify(text)} will not do. See --help.`);
  }
  return { [name]: value } as Record<Name, number>;
}

async function answerOne(asked: Asked): Promise<number> {
  const text = await readAll(process.stdin);
  if (text === null) throw new BadProblem(tooLong());
  if (text.trim() === '') throw new BadProblem('no problem came in on standard input');
  await write(answerProblem(text, asked, performance.now()));
  return 0;
}

/** Each line is answered before the next is looked at; a bad one is answered with its trouble. */
async function answerStream(asked: Asked): Promise<number> {
  let code = 0;
  if (asked.iterations === undefined) warmUp();
  for await (const { number: line, text, at } of readLines(process.stdin)) {
    if (text?.trim() === '') continue;
    try {
      if (text === null) throw new BadProblem(tooLong());
      await write(answerProblem(text, asked, at));
    } catch (error) {
      if (!(error instanceof BadProblem)) throw error;
      code = EXIT_BAD_PROBLEM;
      await write(JSON.stringify({ error: error.message, line }));
    }
  }
  return code;
}

const tooLong = (): string => `longer than ${MOST_BYTES / 2 ** 20} MB`;

async function write(line: string): Promise<void> {
  if (!process.stdout.write(`${line}\n`)) await once(process.stdout, 'drain');
}

function complain(words: string, code: number): number {
  process.stderr.write(`${words}\n`);
  return code;
}
