/** Deadlock and serialization failure: PostgreSQL asks for the transaction to be tried again. */
const TRY_AGAIN = new Set(['40P01', '40001']);
const TRIES = 3;

/** Runs a whole transaction again, at most three times, when PostgreSQL gave up on it for others' sake. */
export async function withRetries<T>(transaction: () => Promise<T>): Promise<T> {
  for (let tried = 1; ; tried++) {
    try {
      return await transaction();
    } catch (cause) {
      if (tried === TRIES || !TRY_AGAIN.has(sqlStateOf(cause))) throw cause;
    }
  }
}

function sqlStateOf(cause: unknown): string {
  const error = cause as { code?: string; original?: { code?: string } } | null;
  return error?.original?.code ?? error?.code ?? '';
}
