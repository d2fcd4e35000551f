/** What the bundler's runtime says of a part that it could not load; it never tries that part again. */
const NOT_LOADED = /^Failed to load (external module|chunk)/;

/** Next calls this once when a server starts. */
export async function register(): Promise<void> {
  if (process.env.NEXT_RUNTIME === 'nodejs' && process.env.DATABASE_URL) {
    try {
      // Pictures are made by the first who asks for one: by then there may be no descriptor left to load this with.
      await import('sharp');
      const { startHousekeeping } = await import('./app/api/housekeeping');
      startHousekeeping();
    } catch (error) {
      endBroken(error);
    }
  }
}

/** Next calls this with every error that no route has turned into an answer. */
export function onRequestError(error: unknown): void {
  if (process.env.NEXT_RUNTIME === 'nodejs' && error instanceof Error && NOT_LOADED.test(error.message)) {
    endBroken(error);
  }
}

/**
 * Ends a server that could not load its own parts, as without file descriptors: it would answer 500 for as long as it
 * lives. Whoever watches over it starts it again.
 */
function endBroken(error: unknown): void {
  if (process.env.NEXT_RUNTIME !== 'nodejs') return;
  process.stderr.write(`The web server could not load its parts and ends: ${String(error)}\n`);
  process.exit(1);
}
