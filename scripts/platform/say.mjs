/** Below this a step is over before anyone wonders, and a line about its end would only be noise. */
const WORTH_SAYING_MS = 2_000;

/**
 * @typedef {{ line(text: string): void, step<T>(doing: string, work: () => Promise<T>): Promise<T> }} Say
 */

/**
 * Lines about what a command is doing.
 * @param {NodeJS.WritableStream} stream stderr where stdout belongs to the answer of the command
 * @returns {Say}
 */
export function sayOn(stream) {
  const line = (/** @type {string} */ text) => void stream.write(`${text}\n`);
  return {
    line,
    async step(doing, work) {
      line(`${doing} ...`);
      const begun_ms = Date.now();
      const result = await work();
      const spent_ms = Date.now() - begun_ms;
      if (spent_ms >= WORTH_SAYING_MS) line(`  done in ${Math.round(spent_ms / 1000)} s`);
      return result;
    },
  };
}
