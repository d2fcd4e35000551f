/** What a computation may tell while it runs. */
export interface WorkContext {
  /** Share done, 0..1. */
  onProgress(share: number): void;
}
