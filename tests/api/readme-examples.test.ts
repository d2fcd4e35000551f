import { execFile } from 'node:child_process';
import { mkdtemp, readFile, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase } from '@/models/database';
import { sharedServer } from '../helpers/server';
import { writeSmallStack } from '../helpers/small-stack';
import { makeTestLab, type TestLab } from '../helpers/test-lab';

const run = promisify(execFile);
const server = sharedServer();
const PATIENCE_MS = 240_000;

/** Examples of README.md in their order: language and text of every block that is marked as one. */
const examples = async (): Promise<[language: string, text: string][]> => {
  const readme = await readFile(join(import.meta.dirname, '..', '..', 'README.md'), 'utf8');
  return [...readme.matchAll(/^```(\w+) example\n([\s\S]*?)^```$/gm)].map(([, language, text]) => [language, text]); // prettier-ignore
};

let lab: TestLab;
let folder: string;
let stack: string;
beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  folder = await mkdtemp(join(process.env.TEST_FOLDER ?? tmpdir(), 'readme-'));
  ({ stack } = await writeSmallStack());
}, 60_000);
afterAll(closeDatabase);

async function runExample(language: string): Promise<string> {
  const text = (await examples()).find(([of]) => of === language)?.[1];
  if (!text) throw new Error(`README.md has no example in ${language}.`);
  const [program, ending] = {
    sh: ['/bin/bash', 'sh'],
    python: [process.env.TEST_PYTHON ?? '/usr/bin/python3', 'py'],
    js: [process.execPath, 'mjs'],
  }[language] ?? ['', ''];
  const file = join(folder, `example.${ending}`);
  await writeFile(file, text);
  const { token } = lab.people.experimentalist;
  const env = { ...process.env, API: `${server.baseUrl}/api/v1`, TOKEN: token, STACK: stack };
  const args = language === 'sh' ? ['-eu', '-o', 'pipefail', file] : [file];
  const { stdout } = await run(program, args, { cwd: folder, env, timeout: PATIENCE_MS });
  return stdout;
}

/** The examples go on where the one before left off, as a reader does. */
describe('examples of README.md', () => {
  it('are in curl, Python and JavaScript', async () => {
    expect((await examples()).map(([language]) => language)).toEqual(['sh', 'python', 'js']);
  });

  it(
    'curl: from a stack to tracks and estimates',
    async () => {
      const estimates = JSON.parse(await runExample('sh')) as { quantity: string; method: string }[];
      expect(estimates.some(({ quantity, method }) => quantity === 'line_density' && method === 'combined')).toBe(true); // prettier-ignore
      expect((await readFile(join(folder, 'tracks.csv'), 'utf8')).split('\r\n')[0]).toMatch(/^track,frame,t_s,/); // prettier-ignore
    },
    PATIENCE_MS,
  );

  it(
    'Python: velocities into NumPy',
    async () => {
      expect(await runExample('python')).toMatch(
        /^(trapped|free) -?\d+\.\d{3} mm\/s along x from \d+ tracks$/m,
      );
    },
    PATIENCE_MS,
  );

  it(
    'JavaScript: the comparison, and a data package',
    async () => {
      const lines = (await runExample('js')).trim().split('\n');
      expect(lines[0]).toMatch(/^Run 1 /);
      const bytes = await readFile(join(folder, 'package.zip'));
      // Local file header signature of ZIP (APPNOTE 4.3.7).
      expect(bytes.readUInt32LE(0)).toBe(0x04034b50);
      expect(lines.at(-1)).toContain(` ${bytes.length} `);
    },
    PATIENCE_MS,
  );
});
