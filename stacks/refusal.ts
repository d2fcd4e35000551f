/** What a person reads about a stack: a code for programs and one sentence. */
export interface StackNote {
  code: string;
  detail: string;
}

/** The answer that a stack can't be used, with the sentence for the person who sent it. */
export class StackRefusal extends Error {
  constructor(
    readonly code: string,
    readonly detail: string,
    /** What the person could choose instead: how many pages are intact, or how many channels there are. */
    readonly choice: { intactPages?: number; channels?: number } = {},
    options?: ErrorOptions,
  ) {
    super(detail, options);
    this.name = 'StackRefusal';
  }
}
