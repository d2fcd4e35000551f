import { readdirSync, readFileSync, writeFileSync } from 'node:fs';

/** Resident memory of the only child of this process, MB (2^20 bytes). */
export interface ChildMemory {
  nowMB: number;
  /** Most since it was last asked. */
  peakMB: number;
}

/** Looks at the child and starts the peak anew; null where the system doesn't tell or there is not just one child. */
export function lookAtChild(): ChildMemory | null {
  const children = childrenOf(process.pid);
  if (children.length !== 1) return null;
  const status = text(`/proc/${children[0]}/status`);
  const megabytes = (name: string) =>
    Number(new RegExp(`^${name}:\\s+(\\d+) kB`, 'm').exec(status)?.[1]) / 1024;
  try {
    // Linux, proc(5): 5 sets the peak back to what is resident now.
    writeFileSync(`/proc/${children[0]}/clear_refs`, '5');
  } catch {
    return null;
  }
  return { nowMB: megabytes('VmRSS'), peakMB: megabytes('VmHWM') };
}

function childrenOf(parent: number): string[] {
  const isChild = (pid: string) =>
    Number(/^PPid:\s+(\d+)/m.exec(text(`/proc/${pid}/status`))?.[1]) === parent;
  try {
    return readdirSync('/proc').filter((entry) => /^\d+$/.test(entry) && isChild(entry));
  } catch {
    return [];
  }
}

/** Processes come and go while they are looked at. */
function text(path: string): string {
  try {
    return readFileSync(path, 'latin1');
  } catch {
    return '';
  }
}
