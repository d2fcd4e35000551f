import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { ROUTES } from '@/app/api/route-table';
import { ROLES } from '@/lib/access';
import { FAULT_ROWS } from './helpers/fault-rows';

/** Text of all files below `tests` that hold tests, by path: also of those that stand in parts. */
const files = new Map(
  (readdirSync('tests', { recursive: true }) as string[])
    .filter((path) => /\.(test|spec)\.tsx?$|^e2e\/support\/they-/.test(path))
    .map((path) => [path, readFileSync(join('tests', path), 'utf8')]),
);

const covered = FAULT_ROWS.filter(({ tests }) => tests.length > 0);
const endured = [...readFileSync('scripts/endure/faults.ts', 'utf8').matchAll(/^ {2}'[a-z ]+': \{/gm)];
const tusTitles = [...files]
  .filter(([path]) => /tus-(core|extensions)\.test/.test(path))
  .flatMap(([, text]) => [...text.matchAll(/^\s*it(?:\.each\([^\n]*\))?\(\s*['`]/gm)]);
const bad = new Set(
  [...files.values(), readFileSync('tests/helpers/bad-stacks.ts', 'utf8')].flatMap((text) =>
    [...text.matchAll(/(?:['"`]|\/\/ )(B\d+)\b/g)].map(([, row]) => row),
  ),
);
const cells = Object.keys(ROUTES).length * (ROLES.length + 2);
const damage = files.get('stacks/damaged-bytes.test.ts') ?? '';
const numberIn = (pattern: RegExp) => Number(pattern.exec(damage)?.[1] ?? 0);
/** Kinds of stacks, each named in a row of its own, times the damages done to each. */
const seedRows = /const SEEDS[^=]*= \[([\s\S]*?)\n\];/.exec(damage)?.[1] ?? '';
const seeds = [...seedRows.matchAll(/'[\w.-]+\.(?:tif|npy|png|zip|h5)',/g)].length;
const hdf5Seeds = [...damage.matchAll(/RUNS_HDF5\],/g)].length;
const fuzzRuns =
  (seeds - hdf5Seeds) * numberIn(/const RUNS = (\d+)/) + hdf5Seeds * numberIn(/const RUNS_HDF5 = (\d+)/);
/** Extensions of tus 1.0.0 that are not offered, with the reason: none of their clauses applies. */
const NOT_OFFERED = {
  'creation-defer-length': 'a stack is on disk before it is sent, so that its length is known',
  'checksum-trailer': 'Node hands trailers on only after the body was written',
  concatenation:
    'one sender writes to an upload at a time; a folder of frames is many uploads of one recording',
};

describe('what is counted', () => {
  it(`${covered.length} of 32 faults are made by a test; npm run endure makes ${endured.length} kinds at random`, () => {
    expect(FAULT_ROWS.map(({ row }) => row)).toEqual(Array.from({ length: 32 }, (_, i) => `F${i + 1}`));
    for (const { row, tests, why } of FAULT_ROWS) {
      for (const [path, title] of tests) {
        expect(files.get(path), `${row}: ${path}`).toBeDefined();
        expect(files.get(path)!.includes(title), `${row}: '${title}' in ${path}`).toBe(true);
      }
      if (tests.length === 0) expect(why, `${row} has no test and no reason`).toBeTruthy();
    }
    expect(endured.length).toBeGreaterThan(10);
  });

  it(`${tusTitles.length} tests quote clauses of tus 1.0.0 against the running server; not offered: ${Object.keys(NOT_OFFERED).join(', ')}`, () => {
    expect(tusTitles.length).toBeGreaterThan(35);
    const headers = readFileSync('app/api/uploads/tus-headers.ts', 'utf8');
    for (const [name, why] of Object.entries(NOT_OFFERED)) {
      expect(why).toBeTruthy();
      expect(headers.includes(`'${name}'`), name).toBe(false);
    }
  });

  it(`${bad.size} of 44 bad inputs have a test`, () => {
    expect([...bad].sort()).toEqual(Array.from({ length: 44 }, (_, i) => `B${i + 1}`).sort());
  });

  it(`the matrix of rights has ${cells} cells: ${Object.keys(ROUTES).length} routes, five roles, nobody, another laboratory`, () => {
    expect(cells).toBeGreaterThan(400);
  });

  it(`${fuzzRuns} damaged stacks of ${seeds} kinds end as a recording or as a refusal`, () => {
    expect(seeds).toBe(10);
    expect(fuzzRuns).toBe(8 * 150 + 2 * 25);
  });
});
