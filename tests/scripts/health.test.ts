import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterEach, describe, expect, it } from 'vitest';
import { waitForHealth } from '@/scripts/platform/health.mjs';

let server: Server;
afterEach(() => new Promise((resolve) => server.close(resolve)));

/** A health route that answers these, one after the other, and then the last one for ever. */
async function answering(...answers: [status: number, body: string][]): Promise<string> {
  let asked = 0;
  server = createServer((_request, response) => {
    const [status, body] = answers[Math.min(asked++, answers.length - 1)];
    response.writeHead(status, { 'Content-Type': 'application/json', Connection: 'close' }).end(body);
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
}

const body = (database: 'up' | 'down', workers: number) =>
  JSON.stringify({ status: 'down', database, queue: 'down', workers });
const wait = (url: string, withWorkers: boolean, within_ms = 900) =>
  waitForHealth(url, { within_ms, withWorkers, explain: () => 'their logs' });

describe('the wait for health', () => {
  it('ends with the first 200', async () => {
    await expect(
      wait(await answering([503, body('up', 0)], [200, '{}']), true, 20_000),
    ).resolves.toBeUndefined();
  });

  it('ends without workers of its own as soon as the database answers', async () => {
    await expect(wait(await answering([503, body('up', 0)]), false, 20_000)).resolves.toBeUndefined();
  });

  it('goes on while workers that were started have not reported', async () => {
    await expect(wait(await answering([503, body('up', 0)]), true)).rejects.toThrow(
      /last: 503 .*their logs/s,
    );
  });

  it('goes on while the database is down, with workers or without, and while the answer is no JSON', async () => {
    const url = await answering([503, body('down', 0)], [502, 'Bad gateway']);
    await expect(wait(url, false)).rejects.toThrow(/did not become healthy/);
    await expect(wait(url, true)).rejects.toThrow(/did not become healthy/);
  });
});
