/** A reason to stop that the person at the terminal can act on: printed as one sentence, without a trace. */
export class PlainStop extends Error {
  /**
   * @param {string} sentence
   * @param {number} [exitCode]
   */
  constructor(sentence, exitCode = 1) {
    super(sentence);
    this.name = 'PlainStop';
    this.exitCode = exitCode;
  }
}

/**
 * Runs a command to its end; whatever goes wrong becomes a sentence or a trace on stderr and an exit code.
 * @param {() => Promise<number | void>} command answers with the exit code, or nothing to let the process run on
 */
export async function runToExit(command) {
  try {
    const code = await command();
    if (code !== undefined) process.exit(code);
  } catch (error) {
    if (error instanceof PlainStop) {
      process.stderr.write(`${error.message}\n`);
      process.exit(error.exitCode);
    }
    process.stderr.write(`${error instanceof Error ? (error.stack ?? error.message) : String(error)}\n`);
    process.exit(1);
  }
}
