import { createServer, type Server } from 'node:net';
import { afterEach, describe, expect, it } from 'vitest';
import { answersOn, freePort, isPortFree } from '@/scripts/platform/free-port.mjs';

let server: Server | undefined;

afterEach(async () => {
  await new Promise<void>((resolve) => (server ? server.close(() => resolve()) : resolve()));
  server = undefined;
});

const listenOn = (port: number): Promise<void> =>
  new Promise((resolve) => {
    server = createServer().listen(port, '127.0.0.1', () => resolve());
  });

describe('choosing a port', () => {
  it('keeps the preferred port while nobody holds it and takes another one when somebody does', async () => {
    const preferred = await freePort();
    expect(await freePort(preferred)).toBe(preferred);
    await listenOn(preferred);
    expect(await isPortFree(preferred)).toBe(false);
    expect(await freePort(preferred)).not.toBe(preferred);
  });

  it('knows whether somebody answers', async () => {
    const port = await freePort();
    expect(await answersOn('127.0.0.1', port)).toBe(false);
    await listenOn(port);
    expect(await answersOn('127.0.0.1', port)).toBe(true);
  });
});
