import { readFileSync } from 'node:fs';

/** Resident memory of a process, MB (2^20 bytes); null where the system doesn't tell. */
export function residentMB(pid: number): number | null {
  try {
    const status = readFileSync(`/proc/${pid}/status`, 'latin1');
    const kilobytes = /^VmRSS:\s+(\d+) kB/m.exec(status);
    return kilobytes ? Number(kilobytes[1]) / 1024 : null;
  } catch {
    return null;
  }
}
