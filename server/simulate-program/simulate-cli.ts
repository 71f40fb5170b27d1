import { parseArgs } from 'node:util';
import {
  comparePolicies,
  POLICY_NAMES,
  type ComparisonOptions,
  type PolicyName,
} from '@shared/domain/simulation/compare-policies';
import { tableInWords } from './table-in-words';

const HELP = `Plays made-up storms without a server, under several ways to dispatch, and compares them.

  --seed N              the first storm (default 1)
  --seeds N             how many storms, one after the other (default 20)
  --calls N             calls of each storm (default 600)
  --technicians N       technicians (default 12)
  --policy NAME,...     of ${POLICY_NAMES.join(', ')} (default: all but clairvoyant)
  --iterations N        rounds of search for each plan (default 1000)
  --clairvoyant N       rounds of the clairvoyant search (default 60000)
  --look-ahead          plans for calls that are likely to come, too
  --json                prints the figures as JSON
`;

/** sysexits.h: EX_USAGE. */
const EXIT_USAGE = 64;

class Usage extends Error {}

/** @returns the exit code */
export function simulateProgram(args: readonly string[]): number {
  try {
    const { help, json, ...options } = readArgs(args);
    if (help) return say(HELP);
    const table = comparePolicies({
      ...options,
      onRun: (seed, policy, { valueSaved, valueAtStake, visits }) =>
        process.stderr.write(
          `  storm ${seed}  ${policy.padEnd(12)} saved ${((100 * valueSaved) / valueAtStake).toFixed(1)} %, ${visits} visits\n`,
        ),
    });
    const { seeds, calls, technicians, rolling } = options;
    return say(
      json
        ? `${JSON.stringify({ seeds, calls, technicians, ...rolling, policies: table }, null, 2)}\n`
        : tableInWords(table, options),
    );
  } catch (error) {
    if (!(error instanceof Usage)) throw error;
    process.stderr.write(`${error.message}\n`);
    return EXIT_USAGE;
  }
}

function readArgs(args: readonly string[]): ComparisonOptions & { help: boolean; json: boolean } {
  let values;
  try {
    ({ values } = parseArgs({
      args: [...args],
      options: {
        seed: { type: 'string', default: '1' },
        seeds: { type: 'string', default: '20' },
        calls: { type: 'string', default: '600' },
        technicians: { type: 'string', default: '12' },
        policy: { type: 'string', default: POLICY_NAMES.slice(0, -1).join() },
        iterations: { type: 'string', default: '1000' },
        clairvoyant: { type: 'string', default: '60000' },
        'look-ahead': { type: 'boolean', default: false },
        json: { type: 'boolean', default: false },
        help: { type: 'boolean', default: false },
      },
    }));
  } catch (error) {
    throw new Usage(`${(error as Error).message.split('\n')[0]} See --help.`);
  }
  const first = whole('seed', values.seed);
  return {
    help: values.help,
    json: values.json,
    seeds: Array.from({ length: whole('seeds', values.seeds, 1) }, (_, index) => first + index),
    calls: whole('calls', values.calls),
    technicians: whole('technicians', values.technicians, 1),
    policies: policies(values.policy),
    rolling: {
      iterations: whole('iterations', values.iterations),
      looksAhead: values['look-ahead'],
    },
    clairvoyantIterations: whole('clairvoyant', values.clairvoyant),
  };
}

function whole(name: string, text: string, least = 0): number {
  const value = Number(text);
  if (text.trim() === '' || !Number.isSafeInteger(value) || value < least) {
    throw new Usage(`--${name} must be a whole number of ${least} or more. See --help.`);
  }
  return value;
}

function policies(text: string): PolicyName[] {
  return text.split(',').map((name) => {
    const known = POLICY_NAMES.find((one) => one === name.trim());
    if (!known) throw new Usage(`--policy: there is no "${name}". See --help.`);
    return known;
  });
}

function say(text: string): number {
  process.stdout.write(text);
  return 0;
}
