import { PlainStop } from './plain-stop.mjs';

const ASK_EVERY_MS = 250;

/**
 * Waits until the health route says that web server, database, queue and workers all answer.
 * @param {string} url origin of the web server
 * @param {object} options
 * @param {number} options.within_ms
 * @param {boolean} [options.withWorkers] false: those of another machine may come later, and the queue with them
 * @param {() => boolean} [options.isStopping]
 * @param {() => string} options.explain words to add to a failure
 */
export async function waitForHealth(
  url,
  { within_ms, withWorkers = true, isStopping = () => false, explain },
) {
  const until_ms = Date.now() + within_ms;
  let last = 'no answer';
  while (Date.now() < until_ms && !isStopping()) {
    try {
      const response = await fetch(`${url}/api/health`, { signal: AbortSignal.timeout(5_000) });
      const text = await response.text();
      if (response.status === 200 || (!withWorkers && JSON.parse(text).database === 'up')) return;
      last = `${response.status} ${text.slice(0, 300)}`;
    } catch (error) {
      last = /** @type {Error} */ (error).message;
    }
    await new Promise((resolve) => setTimeout(resolve, ASK_EVERY_MS));
  }
  if (isStopping()) return;
  throw new PlainStop(
    `${url}/api/health did not become healthy within ${within_ms / 1000} s (last: ${last}).\n${explain()}`,
  );
}
