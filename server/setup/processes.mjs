import { spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { open, readdir, readFile, rename } from 'node:fs/promises';
import path from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';

import { dataFolder, root, shortName, shown } from './paths.mjs';
import { SetupProblem } from './problem.mjs';
import { lastLines } from './run.mjs';

const STOP_SECONDS = 20;

/**
 * Process ids whose command line contains the text. Looked up in /proc and not in a pid file: a killed
 * run may have had no time to write one, and a pid in an old file may belong to another program by now.
 */
export async function findProcesses(text) {
  const found = [];
  for (const entry of await readdir('/proc')) {
    if (!/^\d+$/.test(entry) || Number(entry) === process.pid) continue;
    // The process may end while we look.
    const commandLine = await readFile(`/proc/${entry}/cmdline`, 'utf8').catch(() => '');
    if (commandLine.includes(text)) found.push(Number(entry));
  }
  return found;
}

/** Whether a process runs. One that has ended, but that its parent has not yet taken note of, does not. */
export function isAlive(pid) {
  try {
    const [, state] = /\) (\S)/.exec(readFileSync(`/proc/${pid}/stat`, 'utf8')) ?? [];
    return state !== 'Z';
  } catch {
    // No such process.
    return false;
  }
}

/** Asks a process to end, waits, and makes an end of it when it does not. Returns whether it went by itself. */
export async function stopProcess(pid, seconds = STOP_SECONDS) {
  for (const signal of ['SIGTERM', 'SIGKILL']) {
    try {
      process.kill(pid, signal);
    } catch {
      return true;
    }
    for (let waited = 0; waited < seconds * 1000; waited += 50) {
      if (!isAlive(pid)) return signal === 'SIGTERM';
      await sleep(50);
    }
  }
  return false;
}

/** A word on the command line by which a later run finds the programs that a killed run left. */
const marker = (purpose) => `--started-for=${purpose}-${shortName(dataFolder)}`;

/** Stops what an earlier, killed run of this purpose left running. Returns how many there were. */
export async function stopLeftovers(purpose) {
  const left = await findProcesses(marker(purpose));
  await Promise.all(left.map((pid) => stopProcess(pid)));
  return left.length;
}

/**
 * Starts one of the built programs in its own process group, so that Ctrl-C reaches only the script
 * that started it, which then stops the programs in order. Its output goes to a log in the data folder.
 */
export async function startProgram(name, purpose, env) {
  const logFile = path.join(dataFolder, `${purpose}-${name}.log`);
  // Keep the run before: it may say why that one ended. There is none at the first start.
  await rename(logFile, `${logFile}.1`).catch(() => {});
  const log = await open(logFile, 'a', 0o600);
  const program = path.join(root, 'dist', 'server', `${name}.js`);
  const child = spawn(process.execPath, ['--enable-source-maps', program, marker(purpose)], {
    cwd: root,
    env: { ...process.env, ...env },
    detached: true,
    stdio: ['ignore', log.fd, log.fd],
  });
  await log.close();
  const ended = new Promise((resolve) => {
    child.once('error', () => resolve(1));
    child.once('exit', (code) => resolve(code ?? 1));
  });
  return { name, pid: child.pid, logFile, ended };
}

/**
 * Starts one of the built programs and waits until an address of it answers 200.
 *
 * @param started called with the process id as soon as there is something to stop
 */
export async function startAndWait(name, purpose, env, url, seconds, started = () => {}) {
  const program = await startProgram(name, purpose, env);
  started(program.pid);
  const outcome = await waitForAnswer(url, program, seconds);
  if (outcome === 'ready') return program;

  const said = lastLines(await readFile(program.logFile, 'utf8'), 12);
  throw new SetupProblem(
    outcome === 'late'
      ? `${name} did not answer at ${url} within ${seconds} s. The end of ${shown(program.logFile)}:\n${said}`
      : `${name} ended while it started (exit code ${outcome}). The end of ${shown(program.logFile)}:\n${said}`,
  );
}

/** Gives 'ready', 'late', or the exit code of a program that ended before it answered. */
async function waitForAnswer(url, program, seconds) {
  let exitCode;
  void program.ended.then((code) => (exitCode = code));
  const deadline = Date.now() + seconds * 1000;
  while (Date.now() < deadline) {
    if (exitCode !== undefined) return exitCode;
    // Refused until it listens, 503 until it is ready.
    const answer = await fetch(url, { signal: AbortSignal.timeout(2000) }).catch(() => null);
    if (answer?.ok) return 'ready';
    await sleep(100);
  }
  return 'late';
}
