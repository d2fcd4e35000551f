import { useState } from 'react';
import { ApiError } from './api-client';

/** What a failure is told as: of a refused form the field's own sentence says most. */
function failureWords(error: unknown): string {
  if (error instanceof ApiError && error.errors.length > 0) return error.errors[0].message;
  return error instanceof Error ? error.message : 'That did not work. Try again.';
}

/**
 * One act at a time that may fail.
 * @returns `act` does it; `busy` is the name of the one under way (null: none); `problem` says in a sentence why the
 *   last one failed
 */
export function useAct() {
  const [busy, setBusy] = useState<string | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  async function act(work: () => Promise<unknown>, name = 'act'): Promise<void> {
    setBusy(name);
    setProblem(null);
    try {
      await work();
    } catch (error) {
      setProblem(failureWords(error));
    } finally {
      setBusy(null);
    }
  }
  return { busy, problem, act };
}
