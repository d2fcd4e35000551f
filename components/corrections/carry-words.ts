import { formatCount } from '@/lib/format/count';
import type { CarryReport } from '@/lib/views/correction-view';

const corrections = (count: number) => `${formatCount(count)} ${count === 1 ? 'correction' : 'corrections'}`;

/** What became of corrections that were carried, or would become, in sentences. */
export function carryWords({ carried, already, before, left, preview }: CarryReport): string {
  const sentences: string[] = [];
  if (carried > 0 || already + left.length === 0) {
    const verb = preview ? 'can be carried' : carried === 1 ? 'was carried' : 'were carried';
    sentences.push(`${carried === 0 ? 'No correction' : corrections(carried)} ${verb}.`);
  }
  if (already > 0) sentences.push(`For ${corrections(already)} the tracks here are so already.`);
  if (left.length > 0) {
    const verb = preview ? "can't be carried" : left.length === 1 ? 'was left' : 'were left';
    sentences.push(`${corrections(left.length)} ${verb}.`);
  }
  if (before > 0) sentences.push(`Up to revision ${before} they were carried here before.`);
  return sentences.join(' ');
}
