import type { TestProject } from 'vitest/node';
import { startServer } from './start-server';

/** Starts the product once for all API and browser tests; vitest calls it only when one of them was chosen. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const { stop, ...server } = await startServer('server');
  project.provide('sharedServer', server);
  return stop;
}
