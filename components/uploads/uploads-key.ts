/** Key of a run's open uploads in the store of answers. */
export const uploadsKey = (runId: string) => ['run', runId, 'uploads'] as const;
