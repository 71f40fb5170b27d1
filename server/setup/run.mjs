import { spawn } from 'node:child_process';

import { root } from './paths.mjs';

/** Programs that run now; none may outlive this script when it is told to stop. */
const running = new Set();
process.on('exit', () => running.forEach((child) => child.kill()));

/**
 * Runs a program to its end and collects what it says.
 *
 * @param options.env added to this process's environment
 * @param options.onOutput called with each piece of output as it comes, and 'stdout' or 'stderr'
 * @returns the exit code (1 when a signal ended it) and all output, in order of arrival
 */
export function run(command, args, { env, cwd = root, onOutput } = {}) {
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, {
      cwd,
      env: { ...process.env, ...env },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    running.add(child);
    let output = '';
    for (const from of ['stdout', 'stderr']) {
      child[from].setEncoding('utf8').on('data', (text) => {
        output += text;
        onOutput?.(text, from);
      });
    }
    child.once('error', (error) => {
      running.delete(child);
      reject(error);
    });
    child.once('close', (code) => {
      running.delete(child);
      resolve({ code: code ?? 1, output });
    });
  });
}

/** The last lines of a program's output: what a person needs to see when it failed. */
export const lastLines = (output, count = 25) =>
  output.trimEnd().split('\n').slice(-count).join('\n');

/**
 * Runs a program that prints one JSON object on stdout, and reads it.
 *
 * @param onError called with what it says on stderr meanwhile
 */
export async function runForJson(command, args, { env, onError }) {
  let stdout = '';
  const { code, output } = await run(command, args, {
    env,
    onOutput: (text, from) => (from === 'stdout' ? (stdout += text) : onError(text)),
  });
  if (code !== 0) throw new Error(`${args.at(-1)} failed:\n${lastLines(output, 40)}`);
  return JSON.parse(stdout);
}
