const MICRO = 1e-6;

/** CPU time of a piece of work in this process, s: other programs on the machine don't count. */
export async function cpuSeconds(work: () => void | Promise<void>): Promise<number> {
  const before = process.cpuUsage();
  await work();
  const { user, system } = process.cpuUsage(before);
  return MICRO * (user + system);
}
