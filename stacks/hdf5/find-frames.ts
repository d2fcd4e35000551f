import { StackRefusal } from '../refusal';
import { shownName } from '../sentence';
import { type Hdf5File } from './hdf5-file';
import { type Hdf5Type } from './hdf5-module';

/** A file with more things in it than this was not written by a camera. */
const THINGS_MAX = 20_000;
/** Names that a sentence can take. */
const NAMED_MAX = 5;
const [WHOLE, FLOATING] = [0, 1];

export interface FoundArray {
  path: string;
  type: Hdf5Type;
}

interface Contents {
  /** Arrays of numbers, each once, whatever the number of links to it. */
  arrays: FoundArray[];
  /** Arrays that their NXdata group calls its signal. */
  signals: FoundArray[];
}

/**
 * The array of (frames, rows, columns) that is the recording: what the file's NeXus default leads to, else
 * the only signal of an NXdata group with three dimensions, else the only array with three.
 * @throws StackRefusal HDF5_ARRAY when there is none, or more than one
 */
export function findFrames(file: Hdf5File): FoundArray {
  const byDefault = defaultSignal(file);
  if (byDefault && hasFrames(byDefault)) return byDefault;
  const { arrays, signals } = contentsOf(file);
  for (const candidates of [signals.filter(hasFrames), arrays.filter(hasFrames)]) {
    if (candidates.length === 1) return candidates[0]!;
    if (candidates.length > 1) throw several(candidates);
  }
  throw none([...(byDefault ? [byDefault] : []), ...signals, ...arrays]);
}

const hasFrames = ({ type }: FoundArray): boolean => type.shape?.length === 3;

function contentsOf(file: Hdf5File): Contents {
  const contents: Contents = { arrays: [], signals: [] };
  const seen = new Set([file.identityOf('/')]);
  const signalsSeen = new Set<string>();
  for (const groups = ['/']; groups.length > 0;) {
    const group = groups.shift()!;
    const signal = signalOf(file, group);
    if (signal && !signalsSeen.has(file.identityOf(signal.path))) {
      signalsSeen.add(file.identityOf(signal.path));
      contents.signals.push(signal);
    }
    for (const path of file.children(group)) {
      const kind = file.kindOf(path);
      if (kind === null) continue;
      const identity = file.identityOf(path);
      if (seen.has(identity)) continue;
      seen.add(identity);
      if (seen.size > THINGS_MAX) throw refused(`The file holds more than 20,000 groups and arrays.`);
      if (kind === 'group') groups.push(path);
      else contents.arrays.push(...numbersAt(file, path));
    }
  }
  return contents;
}

function numbersAt(file: Hdf5File, path: string): FoundArray[] {
  const type = file.typeOf(path);
  return type.type === WHOLE || type.type === FLOATING ? [{ path, type }] : [];
}

/** The array that a group calls its signal: by the group's attribute, or by a mark on the array (older files). */
function signalOf(file: Hdf5File, group: string): FoundArray | null {
  if (file.attribute(group, 'NX_class') !== 'NXdata') return null;
  const named = file.attribute(group, 'signal');
  const paths =
    typeof named === 'string'
      ? [inside(group, named)]
      : file.children(group).filter((path) => isMarked(file, path));
  const path = paths.find((candidate) => file.kindOf(candidate) === 'array');
  return path ? (numbersAt(file, path)[0] ?? null) : null;
}

function isMarked(file: Hdf5File, path: string): boolean {
  if (file.kindOf(path) !== 'array') return false;
  const mark = file.attribute(path, 'signal');
  return mark === 1 || mark === '1';
}

/** What the attributes `default` lead to, from the root by entry and data group. */
function defaultSignal(file: Hdf5File): FoundArray | null {
  let group = '/';
  for (let step = 0; step < 8; step++) {
    const signal = signalOf(file, group);
    if (signal) return signal;
    const next = file.attribute(group, 'default');
    if (typeof next !== 'string' || next === '') return null;
    group = inside(group, next);
    if (file.kindOf(group) !== 'group') return null;
  }
  return null;
}

const inside = (group: string, name: string): string =>
  name.startsWith('/') ? name : `${group === '/' ? '' : group}/${name}`;

function several(arrays: FoundArray[]): StackRefusal {
  const names = arrays.slice(0, NAMED_MAX).map(({ path }) => `'${shownName(path)}'`);
  const more = arrays.length - names.length;
  const list = more > 0 ? `${names.join(', ')} and ${more} more` : names.join(', ');
  return refused(
    `The file holds ${arrays.length} arrays of frames: ${list}. Keep one, or name one as the signal of its NXdata group.`,
  );
}

function none(others: FoundArray[]): StackRefusal {
  const largest = others.sort((a, b) => b.type.total_size - a.type.total_size)[0];
  if (!largest?.type.shape) return refused('The file holds no array of frames.');
  const dimensions = largest.type.shape.length;
  return refused(
    `Array '${shownName(largest.path)}' has ${dimensions} dimension${dimensions === 1 ? '' : 's'}; (frames, rows, columns) are needed.`,
  );
}

const refused = (detail: string): StackRefusal => new StackRefusal('HDF5_ARRAY', detail);
