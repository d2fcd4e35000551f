import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { inject } from 'vitest';

export interface SharedServer {
  /** Origin of the web server, without a slash at the end. */
  baseUrl: string;
  databaseUrl: string;
  dataDir: string;
}

declare module 'vitest' {
  export interface ProvidedContext {
    sharedServer: SharedServer;
  }
}

/** The product that all tests in `tests/api` and `tests/e2e` share: started once, without a demo laboratory. */
export const sharedServer = (): SharedServer => inject('sharedServer');

/**
 * Process numbers of the running product by name (`web`, `worker-1`, ...), for tests that kill one of them;
 * null while one is between two starts.
 */
export function processesOf({ dataDir }: SharedServer): Record<string, number | null> {
  const { children } = JSON.parse(readFileSync(join(dataDir, 'running.json'), 'utf8')) as {
    children: { name: string; pid: number | null }[];
  };
  return Object.fromEntries(children.map(({ name, pid }) => [name, pid]));
}
