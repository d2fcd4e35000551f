import { PlainStop } from './plain-stop.mjs';

const ASK_EVERY_MS = 250;

/**
 * Waits until the health route says that web server, database, queue and workers all answer.
 * @param {string} url origin of the web server
 * @param {{ within_ms: number, good?: number[], isStopping?: () => boolean, explain: () => string }} options
 *   good: statuses that end the wait; explain: words to add to a failure
 */
export async function waitForHealth(url, { within_ms, good = [200], isStopping = () => false, explain }) {
  const until_ms = Date.now() + within_ms;
  let last = 'no answer';
  while (Date.now() < until_ms && !isStopping()) {
    try {
      const response = await fetch(`${url}/api/health`, { signal: AbortSignal.timeout(5_000) });
      if (good.includes(response.status)) return;
      last = `${response.status} ${(await response.text()).slice(0, 300)}`;
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
