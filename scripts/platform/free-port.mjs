import { connect, createServer } from 'node:net';

/**
 * Whether a TCP port of the loopback address can be listened on.
 * @param {number} port
 * @returns {Promise<boolean>}
 */
export function isPortFree(port) {
  return new Promise((resolve) => {
    const server = createServer();
    server.once('error', () => resolve(false));
    server.listen({ port, host: '127.0.0.1', exclusive: true }, () => server.close(() => resolve(true)));
  });
}

/**
 * A port that nothing listens on: the preferred one when it is free, else one that the system picks.
 * @param {number} [preferred]
 * @returns {Promise<number>}
 */
export async function freePort(preferred) {
  if (preferred && (await isPortFree(preferred))) return preferred;
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once('error', reject);
    server.listen(0, '127.0.0.1', () => {
      const { port } = /** @type {import('node:net').AddressInfo} */ (server.address());
      server.close(() => resolve(port));
    });
  });
}

/**
 * Whether somebody answers on a port.
 * @param {string} host
 * @param {number} port
 * @returns {Promise<boolean>}
 */
export function answersOn(host, port) {
  return new Promise((resolve) => {
    const socket = connect({ host, port, timeout: 2_000 });
    const end = (/** @type {boolean} */ answer) => {
      socket.destroy();
      resolve(answer);
    };
    socket.once('connect', () => end(true));
    socket.once('timeout', () => end(false));
    socket.once('error', () => end(false));
  });
}
