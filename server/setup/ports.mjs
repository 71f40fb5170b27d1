import net from 'node:net';

/** Whether nothing listens on the port of this host. A port we may not open counts as taken. */
export function isPortFree(port, host = '127.0.0.1') {
  return new Promise((resolve) => {
    const probe = net.createServer();
    probe.once('error', () => resolve(false));
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/** The first of `count` free ports in a row, at or after `from`. */
export async function nextFreePort(from, host = '127.0.0.1', count = 1) {
  let run = 0;
  for (let port = from; port < Math.min(from + 200, 65_536); port++) {
    run = (await isPortFree(port, host)) ? run + 1 : 0;
    if (run === count) return port - count + 1;
  }
  throw new Error(`No free port between ${from} and ${from + 199}`);
}
