import { until } from './until';

/** Asks until an answer comes that is none of a server, or its database, which is away for a moment. */
export const patiently = <T>(ask: () => Promise<T>): Promise<T> =>
  until(
    () =>
      ask().then(
        (value) => ({ value }),
        () => null,
      ),
    (answer) => answer !== null,
    { withinMs: 120_000, everyMs: 100 },
  ).then((answer) => answer!.value);
