import { parseArgs } from 'node:util';
import { dollars, playDrill, summaryLine, type DrillResult } from './drill';
import { findServer, NoDrill } from './find-server';

const HELP = `Plays a made-up storm into the running demo: calls, phone checks, plans, technicians.

  --seed N               which storm (default 7)
  --calls N              calls (default 600)
  --technicians N        technicians; more than the demo has are added by its owner (default 12)
  --speed N              how many times faster than the clock (default 60)
  --hours N              ends after so many hours of the drill (default: when all is done, or after two days)
  --address URL          the server (default: the one that npm start runs from this folder)
  --sign-ins FILE        its people's sign-ins (default: demo-sign-ins.json in the data folder)
  --yes-into-this-storm  also into a server that is no demo

Exit code: 0 when everything went as it should, 1 after a fault, 2 when no server answers, 3 when it is refused.
`;

/** sysexits.h: EX_USAGE. */
const EXIT_USAGE = 64;

class Usage extends Error {}

/** @returns the exit code */
export async function drillProgram(args: readonly string[], dataFolder: string): Promise<number> {
  const stop = new AbortController();
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const)
    process.once(signal, () => stop.abort());
  try {
    const { help, address, signIns, ...options } = readArgs(args);
    if (help) return say(HELP);
    const server = await findServer(dataFolder, {
      ...(address === undefined ? {} : { address }),
      ...(signIns === undefined ? {} : { signIns }),
    });
    const result = await playDrill(server, {
      ...options,
      signal: stop.signal,
      say: (line) => void say(`${line}\n`),
    });
    return report(result);
  } catch (error) {
    if (error instanceof NoDrill) return complain(error.message, error.exitCode);
    if (error instanceof Usage) return complain(error.message, EXIT_USAGE);
    throw error;
  }
}

function report({ tally, drillHours, savedCents, lostCents, openCalls }: DrillResult): number {
  say(`
The drill is over after ${drillHours.toFixed(1)} of its hours.
  ${summaryLine(tally)}
  ${tally.announcements} announcements came by socket
  saved $${dollars(savedCents)}, lost $${dollars(lostCents)} since it began; ${openCalls} calls are open
`);
  for (const fault of new Set(tally.faults.slice(0, 20)))
    process.stderr.write(`  fault: ${fault}\n`);
  return tally.faults.length > 0 ? 1 : 0;
}

function readArgs(args: readonly string[]) {
  let values;
  try {
    ({ values } = parseArgs({
      args: [...args],
      options: {
        seed: { type: 'string', default: '7' },
        calls: { type: 'string', default: '600' },
        technicians: { type: 'string', default: '12' },
        speed: { type: 'string', default: '60' },
        hours: { type: 'string' },
        address: { type: 'string' },
        'sign-ins': { type: 'string' },
        'yes-into-this-storm': { type: 'boolean', default: false },
        help: { type: 'boolean', default: false },
      },
    }));
  } catch (error) {
    throw new Usage(`${(error as Error).message.split('\n')[0]} See --help.`);
  }
  return {
    help: values.help,
    address: values.address,
    signIns: values['sign-ins'],
    isInsisted: values['yes-into-this-storm'],
    seed: number('seed', values.seed, 0),
    calls: number('calls', values.calls, 1),
    technicians: number('technicians', values.technicians, 1),
    speed: number('speed', values.speed, 0.01, false),
    ...(values.hours === undefined ? {} : { hours: number('hours', values.hours, 0.01, false) }),
  };
}

function number(name: string, text: string, least: number, isWhole = true): number {
  const value = Number(text);
  if (
    text.trim() === '' ||
    !(value >= least && value <= 1e6) ||
    (isWhole && !Number.isInteger(value))
  ) {
    throw new Usage(`--${name}: ${JSON.stringify(text)} will not do. See --help.`);
  }
  return value;
}

function say(text: string): number {
  process.stdout.write(text);
  return 0;
}

function complain(words: string, code: number): number {
  process.stderr.write(`${words}\n`);
  return code;
}
