/** A command was asked for something that can't be: one sentence, exit 2. */
export class BadArguments extends Error {
  override name = 'BadArguments';
}

/** Runs a command: one sentence on standard error when it fails, exit 2 for bad arguments, 1 for the rest. */
export async function runCommand(main: () => Promise<void>, close: () => Promise<void>): Promise<void> {
  try {
    await main();
  } catch (error) {
    process.stderr.write(`${(error as Error).message}\n`);
    process.exitCode = isUsage(error) ? 2 : 1;
  } finally {
    await close();
  }
}

const isUsage = (error: unknown): boolean =>
  error instanceof BadArguments ||
  String((error as { code?: unknown }).code ?? '').startsWith('ERR_PARSE_ARGS');
