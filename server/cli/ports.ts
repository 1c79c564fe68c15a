import { createServer } from 'node:net';

/** Whether nothing listens on that port of loopback. */
export function isPortFree(port: number, host = '127.0.0.1'): Promise<boolean> {
  return new Promise((resolve) => {
    const probe = createServer();
    probe.once('error', () => resolve(false));
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/** The first free port at or after `from`, at most 200 further on. */
export async function findFreePort(from: number, host = '127.0.0.1'): Promise<number> {
  for (let port = from; port < from + 200; port += 1) {
    if (await isPortFree(port, host)) return port;
  }
  throw new Error(`No free port between ${from} and ${from + 199} on ${host}.`);
}
