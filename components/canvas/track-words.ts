import { formatCount } from '@/lib/format/count';
import { FREE, TRAPPED, UNDECIDED, type TrackBlock } from './track-block';

const NAMES: Record<number, string> = { [TRAPPED]: 'trapped', [FREE]: 'free', [UNDECIDED]: 'undecided' };

/** A track in words: `track 1 284, trapped, p = 0.97`. */
export function trackWords(block: TrackBlock, i: number): string {
  const name = NAMES[block.population[i]];
  const p = block.pTrapped[i];
  const words = [`track ${formatCount(block.track[i])}`];
  if (name) words.push(name);
  if (Number.isFinite(p)) words.push(`p = ${probabilityText(p)}`);
  return words.join(', ');
}

/** Two digits, but never a certainty that nobody has. */
export function probabilityText(p: number): string {
  if (p > 0.995 && p < 1) return '> 0.99';
  if (p > 0 && p < 0.005) return '< 0.01';
  return p.toFixed(2);
}
