/** What a person reads about a stack: a code for programs and one sentence. */
export interface StackNote {
  code: string;
  detail: string;
}

/** What could be used instead. */
export interface RefusalOffer {
  /** So many first pages are intact. */
  usePages?: number;
  /** So many colour channels are there to choose from. */
  channels?: number;
}

/** The answer that a stack can't be used, with the sentence for the person who sent it. */
export class StackRefusal extends Error {
  constructor(
    readonly code: string,
    readonly detail: string,
    readonly offer: RefusalOffer = {},
    options?: ErrorOptions,
  ) {
    super(detail, options);
    this.name = 'StackRefusal';
  }
}
