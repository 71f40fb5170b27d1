import net from 'node:net';

/** Whether nothing listens on the port of this host. A port we may not open counts as taken. */
export function isPortFree(port, host = '127.0.0.1') {
  return new Promise((resolve) => {
    const probe = net.createServer();
    probe.once('error', () => resolve(false));
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/** The first free port at or after `from`. */
export async function nextFreePort(from, host = '127.0.0.1') {
  for (let port = from; port < Math.min(from + 200, 65_536); port++) {
    if (await isPortFree(port, host)) return port;
  }
  throw new Error(`No free port between ${from} and ${from + 199}`);
}
