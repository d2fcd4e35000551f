import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { isAlive, waitUntil } from '@/scripts/platform/processes.mjs';
import { createSupervisor, type Supervisor } from '@/scripts/platform/supervise.mjs';
import { tiedCommand } from '@/scripts/platform/tied-command.mjs';
import { spawn } from 'node:child_process';

let folder: string;
let said: string[];
let supervisor: Supervisor;

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'beadline-supervise-'));
  said = [];
  const say = {
    line: (text: string) => void said.push(text),
    step: <T>(_doing: string, work: () => Promise<T>) => work(),
  };
  supervisor = createSupervisor({ logs: folder, say });
});

afterEach(async () => {
  await supervisor.stop();
  rmSync(folder, { recursive: true });
});

const node = (code: string) => [process.execPath, '-e', code];
const FOREVER = 'setInterval(() => {}, 1000);';
const spec = { stopWithin_ms: 5_000, stopOrder: 1 };

describe('supervised children', () => {
  it('a killed child is running again within ten seconds, and what it printed is kept', async () => {
    const child = supervisor.add({ ...spec, name: 'one', command: node(`console.log('up'); ${FOREVER}`) });
    const first = child.pid!;
    expect(await waitUntil(() => child.log.tail(1) === 'up', 15_000)).toBe(true);
    process.kill(first, 'SIGKILL');
    expect(await waitUntil(() => child.pid !== null && child.pid !== first, 10_000)).toBe(true);
    expect(said.join('\n')).toContain('one ended (SIGKILL)');
    expect(await waitUntil(() => readFileSync(join(folder, 'one.log'), 'utf8') === 'up\nup\n', 15_000)).toBe(
      true,
    );
  });

  it('stop in the order of their numbers, each group only after the one before', async () => {
    const onTerm = (name: string, wait_ms: number) =>
      node(`process.on('SIGTERM', () => setTimeout(() => {
        require('fs').appendFileSync('${folder}/order', '${name} '); process.exit(0);
      }, ${wait_ms})); console.log('up'); ${FOREVER}`);
    const children = [
      supervisor.add({ ...spec, name: 'last', command: onTerm('last', 0), stopOrder: 2 }),
      supervisor.add({ ...spec, name: 'first', command: onTerm('first', 300), stopOrder: 1 }),
    ];
    for (const child of children) await waitUntil(() => child.log.tail(1) === 'up', 15_000);
    await supervisor.stop();
    expect(readFileSync(join(folder, 'order'), 'utf8')).toBe('first last ');
  });

  it('one that will not stop is ended when its time is over', async () => {
    const stubborn = node(`process.on('SIGTERM', () => {}); console.log('up'); ${FOREVER}`);
    const child = supervisor.add({ ...spec, name: 'stubborn', command: stubborn, stopWithin_ms: 200 });
    await waitUntil(() => child.log.tail(1) === 'up', 15_000);
    const pid = child.pid!;
    await supervisor.stop();
    expect(isAlive(pid)).toBe(false);
  });

  it('what a killed child has started dies with it', async () => {
    const mother =
      node(`const c = require('child_process').spawn(process.execPath, ['-e', ${JSON.stringify(FOREVER)}]);
      require('fs').writeFileSync('${folder}/pid', String(c.pid)); console.log('up'); ${FOREVER}`);
    const child = supervisor.add({ ...spec, name: 'mother', command: mother });
    await waitUntil(() => child.log.tail(1) === 'up', 15_000);
    const grandchild = Number(readFileSync(join(folder, 'pid'), 'utf8'));
    expect(isAlive(grandchild)).toBe(true);
    process.kill(child.pid!, 'SIGKILL');
    expect(await waitUntil(() => !isAlive(grandchild), 10_000)).toBe(true);
  });

  it('a program that is not there is tried again and does not end the supervisor', async () => {
    supervisor.add({ ...spec, name: 'absent', command: ['/no/such/program'] });
    expect(await waitUntil(() => said.length >= 2, 15_000)).toBe(true);
  });
});

describe('a tied command', () => {
  it('ends when its parent is killed', async () => {
    const command = JSON.stringify(tiedCommand(node(FOREVER)));
    const file = join(folder, 'parent.cjs');
    writeFileSync(
      file,
      `const [p, ...a] = ${command};
      const c = require('child_process').spawn(p, a, { detached: true, stdio: 'ignore' });
      require('fs').writeFileSync('${folder}/tied', String(c.pid)); setInterval(() => {}, 1000);`,
    );
    const parent = spawn(process.execPath, [file]);
    const tied = () => Number(readFileSync(join(folder, 'tied'), 'utf8'));
    await waitUntil(() => {
      try {
        return isAlive(tied());
      } catch {
        return false;
      }
    }, 15_000);
    // The tie is made by the program that the child first runs, a moment after its number is known.
    await waitUntil(
      () => readFileSync(`/proc/${tied()}/cmdline`, 'utf8').startsWith(process.execPath),
      5_000,
    );
    parent.kill('SIGKILL');
    expect(await waitUntil(() => !isAlive(tied()), 10_000)).toBe(true);
  });
});
