import { compareNaturally } from '../natural-order';

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
