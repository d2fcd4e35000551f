import { readdirSync, readFileSync } from 'node:fs';

/** Largest resident memory that any child of this process has had so far, MB (2^20 bytes); NaN where the system doesn't tell. */
export function peakOfChildrenMB(): number {
  let peak = Number.NaN;
  for (const entry of listing('/proc')) {
    if (!/^\d+$/.test(entry)) continue;
    const status = text(`/proc/${entry}/status`);
    if (Number(/^PPid:\s+(\d+)/m.exec(status)?.[1]) !== process.pid) continue;
    const megabytes = Number(/^VmHWM:\s+(\d+) kB/m.exec(status)?.[1]) / 1024;
    if (!(megabytes <= peak)) peak = megabytes;
  }
  return peak;
}

function listing(folder: string): string[] {
  try {
    return readdirSync(folder);
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
