import net from 'node:net';
import { setTimeout as sleep } from 'node:timers/promises';

import { dataFolder, shortName } from './paths.mjs';

/**
 * Takes a named lock for this data folder, or returns null when another process holds it.
 *
 * The lock is a Linux abstract socket: the kernel drops it when its holder dies, however it dies, so
 * a killed run leaves no stale lock file for the next one to trip over.
 *
 * @returns a function that releases the lock
 */
export function tryLock(name) {
  return new Promise((resolve, reject) => {
    const holder = net.createServer((socket) => socket.destroy());
    holder.once('error', (error) => (error.code === 'EADDRINUSE' ? resolve(null) : reject(error)));
    holder.listen(`\0thawline-${name}-${shortName(dataFolder)}`, () => {
      holder.unref();
      resolve(() => new Promise((done) => holder.close(done)));
    });
  });
}

/** Runs `work` while no other process of this data folder runs work under the same name. */
export async function withLock(name, work) {
  let release = await tryLock(name);
  while (!release) {
    await sleep(100);
    release = await tryLock(name);
  }
  try {
    return await work();
  } finally {
    await release();
  }
}
