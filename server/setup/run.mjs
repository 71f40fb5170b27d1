import { spawn } from 'node:child_process';

import { root } from './paths.mjs';

/** Programs that run now; none may outlive this script when it is told to stop. */
const running = new Set();
process.on('exit', () => running.forEach((child) => child.kill()));

/**
 * Runs a program to its end and collects what it says.
 *
 * @param options.env added to this process's environment
 * @param options.onOutput called with each piece of output as it comes
 * @returns the exit code (128 + n for a signal is reported as 1) and all output, in order of arrival
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
    const collect = (data) => {
      output += data;
      onOutput?.(String(data));
    };
    child.stdout.on('data', collect);
    child.stderr.on('data', collect);
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
