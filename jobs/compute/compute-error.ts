/**
 * Why a computation came to nothing. `STOPPED`: called off by the one who asked; `TIMEOUT`, `MEMORY`,
 * `CRASHED`: its process was ended or ended itself; `RECIPE`: the recipe can't be run on this
 * recording; `FAULT`: an error in the work itself.
 */
export type ComputeErrorCode = 'STOPPED' | 'TIMEOUT' | 'MEMORY' | 'CRASHED' | 'RECIPE' | 'FAULT' | 'BUSY';

/** The sentence in `message` is for people. */
export class ComputeError extends Error {
  constructor(
    readonly code: ComputeErrorCode,
    message: string,
    options: { field?: string; cause?: unknown } = {},
  ) {
    super(message, { cause: options.cause });
    this.name = 'ComputeError';
    this.field = options.field;
  }

  /** The field of the recipe that is to blame. */
  readonly field?: string;
}
