/** A failure that trying again can't mend: the work is given up at once. */
export class FinalFailure extends Error {
  constructor(
    readonly code: string,
    detail: string,
  ) {
    super(detail);
    this.name = 'FinalFailure';
  }
}
