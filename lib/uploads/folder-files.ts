/** A file of a chosen folder, with its path below it. */
export interface FolderEntry<F> {
  path: string;
  file: F;
}

/** Endings of files that can be frames; everything else in a folder is notes, thumbnails and the like. */
const FRAME_ENDING = /\.(tiff?|png)$/i;

/**
 * The frames of a folder in their order: numbers in names count as numbers, so `f2` comes before
 * `f10`. Hidden files and files that are not pictures are left out and counted.
 */
export function framesOfFolder<F>(entries: readonly FolderEntry<F>[]): {
  frames: FolderEntry<F>[];
  leftOut: number;
} {
  const frames = entries.filter(({ path }) => FRAME_ENDING.test(path) && !isHidden(path));
  frames.sort((a, b) => compareNaturally(a.path, b.path));
  return { frames, leftOut: entries.length - frames.length };
}

/** The folder's own name: the first part of the path that the browser gives, `frames` without one. */
export function folderNameOf(paths: readonly string[]): string {
  const first = paths[0]?.split('/') ?? [];
  return first.length > 1 ? first[0] : 'frames';
}

const isHidden = (path: string) => path.split('/').some((part) => part.startsWith('.'));

const PARTS = /\d+|\D+/g;

/** Order of names by the numbers in them; a total order, the same on each machine. */
function compareNaturally(a: string, b: string): number {
  const left = a.toLowerCase().match(PARTS) ?? [];
  const right = b.toLowerCase().match(PARTS) ?? [];
  for (let i = 0; i < Math.min(left.length, right.length); i += 1) {
    const order = compareParts(left[i], right[i]);
    if (order !== 0) return order;
  }
  return left.length - right.length || compareText(a, b);
}

function compareParts(a: string, b: string): number {
  if (!/^\d/.test(a) || !/^\d/.test(b)) return compareText(a, b);
  const [x, y] = [a.replace(/^0+(?=\d)/, ''), b.replace(/^0+(?=\d)/, '')];
  return x.length - y.length || compareText(x, y);
}

const compareText = (a: string, b: string) => (a < b ? -1 : a > b ? 1 : 0);
