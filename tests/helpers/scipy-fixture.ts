import { readFileSync } from 'node:fs';

/** Cases and SciPy's answers from tests/fixtures/scipy; the README there says how they were made. */
export function scipyCases<T>(name: string): T {
  const path = new URL(`../fixtures/scipy/${name}.json`, import.meta.url);
  const { madeWith, cases } = JSON.parse(readFileSync(path, 'utf8'));
  if (!madeWith?.scipy) throw new Error(`${name}.json doesn't say which SciPy it comes from.`);
  return cases as T;
}
