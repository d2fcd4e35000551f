/**
 * Under npm one Ctrl-C arrives twice, from the terminal and from npm, so a second signal counts as impatience only
 * after this time.
 */
const SAME_WISH_WITHIN_MS = 1_500;

/**
 * Calls `stop` at the first wish to stop and `force` at a later one.
 * @param {{ stop: () => void, force: () => void }} answers
 */
export function onStopSignals({ stop, force }) {
  /** @type {number | null} */
  let first_ms = null;
  const answer = () => {
    if (first_ms === null) {
      first_ms = Date.now();
      stop();
    } else if (Date.now() - first_ms > SAME_WISH_WITHIN_MS) force();
  };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, answer);
}
