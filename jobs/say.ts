/** One structured line of a log. */
export type Say = (
  level: 'info' | 'warn' | 'error',
  message: string,
  facts?: Record<string, unknown>,
) => void;
