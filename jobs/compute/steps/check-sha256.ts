import type { StackSource } from '@/stacks/stack-report';
import { fileSha256 } from './file-sha256';

/** Enough digits to compare by eye. */
const SHOWN = 12;
const short = (hash: string) => `${hash.slice(0, SHOWN)}..`;

/**
 * Compares every file with what its sender made of it.
 * @param expected per file of the source, null where the sender did not say.
 * @returns the sentence for the first file that differs, null when none does.
 */
export async function checkSha256(
  source: StackSource,
  expected: readonly (string | null)[],
): Promise<string | null> {
  const files = source.kind === 'file' ? [source] : source.files;
  for (const [i, file] of files.entries()) {
    const wanted = expected[i]?.toLowerCase();
    if (!wanted) continue;
    const got = await fileSha256(file.path);
    if (got === wanted) continue;
    const whose = source.kind === 'file' ? 'SHA-256' : `SHA-256 of '${file.name}'`;
    return `${whose} differs: got ${short(got)}, expected ${short(wanted)}. Upload it again.`;
  }
  return null;
}
