import { createServer } from 'node:net';

/** Whether nothing listens on this port of the loopback address. */
export function isPortFree(port) {
  return new Promise((resolve) => {
    const server = createServer();
    server.once('error', () => resolve(false));
    server.listen({ port, host: '127.0.0.1', exclusive: true }, () =>
      server.close(() => resolve(true)),
    );
  });
}

/** A port of the loopback address that nothing listens on: the wish if it is free, or any. */
export async function freePort(wish = 0) {
  if (wish > 0 && wish < 65_536 && (await isPortFree(wish))) return wish;
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once('error', reject);
    server.listen({ port: 0, host: '127.0.0.1', exclusive: true }, () => {
      const { port } = server.address();
      server.close(() => resolve(port));
    });
  });
}
