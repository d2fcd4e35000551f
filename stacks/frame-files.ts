import { type StackNote, StackRefusal } from './refusal';
import { compareNaturally } from '@/lib/natural-order';
import { ranges } from './sentence';
import { namedAsFrame } from './sniff';

/** Files that systems leave in folders and archives by themselves. */
function isByproduct(name: string): boolean {
  const parts = name.split('/');
  return parts.some((part) => part === '__MACOSX') || parts.at(-1)!.startsWith('.');
}

/**
 * The frames among the files of a folder or archive, in natural order. Notes, tables and the like
 * beside the frames are left out.
 * @throws StackRefusal with `emptyCode` when there is no frame.
 */
export function framesInOrder<T extends { name: string }>(
  files: readonly T[],
  container: { code: string; name: string },
): T[] {
  const frames = files.filter(({ name }) => namedAsFrame(name) && !isByproduct(name));
  if (frames.length === 0) {
    throw new StackRefusal(container.code, `The ${container.name} holds no TIFF or PNG frames.`);
  }
  return frames.sort((a, b) => compareNaturally(a.name, b.name));
}

/** The last number of a file name and what stands around it. */
function numbered(name: string) {
  const [, before, digits, after] = /^(.*?)(\d+)(\D*)$/s.exec(name) ?? [];
  return digits && digits.length < 16
    ? { digits, value: Number(digits), around: `${before}\0${after}` }
    : null;
}

/**
 * A warning when frames that are numbered one by one lack some numbers. Numbers that never follow each
 * other, or leave out more than there are, count something else (times, say).
 * @param names in natural order, one frame each
 */
export function frameGaps(names: readonly string[]): StackNote | null {
  const numbers = names.map(numbered);
  const [first] = numbers;
  if (!first || numbers.some((n) => n?.around !== first.around)) return null;
  const values = numbers.map((n) => n!.value);
  const absent = values.at(-1)! - first.value + 1 - values.length;
  const follow = values.some((value, i) => value === values[i - 1]! + 1);
  if (absent <= 0 || absent > values.length || !follow) return null;
  const present = new Set(values);
  const missing: number[] = [];
  for (let k = first.value; k < values.at(-1)!; k++) if (!present.has(k)) missing.push(k);
  if (missing.length === 0) return null;
  const list = ranges(missing, (value) => String(value).padStart(first.digits.length, '0'));
  const [noun, verb] = missing.length === 1 ? ['Frame', 'is'] : ['Frames', 'are'];
  return { code: 'FRAME_GAP', detail: `${noun} ${list} ${verb} missing.` };
}
