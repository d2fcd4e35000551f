import { closeSync, fstatSync, openSync, readSync } from 'node:fs';
import type { EmscriptenFs, EmscriptenNode } from './hdf5-module';

/** Kinds of files in the modes of POSIX. */
const [FOLDER, REGULAR] = [0o040000, 0o100000];
const NO_SUCH_FILE = 44;

/** A file on disk as the library sees it. */
export interface MountedFile {
  /** Its name inside. */
  path: string;
  sizeBytes: number;
  /** An error of the disk during a read, which the library would take for damage of the file. */
  diskError: () => unknown;
  close: () => void;
}

/**
 * Shows one file, read-only, to the library, byte ranges on demand. It is the only one: a file can name
 * others on this machine as parts of itself (external storage, links, virtual arrays), and whoever sends
 * a file must not get to read those.
 */
export function mountOneFile(fs: EmscriptenFs, path: string): MountedFile {
  const descriptor = openSync(path, 'r');
  const sizeBytes = fstatSync(descriptor).size;
  let diskError: unknown;
  const attributes = (node: EmscriptenNode) => ({
    ...{ dev: 1, ino: node.id, mode: node.mode, nlink: 1, uid: 0, gid: 0, rdev: 0, size: node.size ?? 0 },
    ...{ atime: new Date(0), mtime: new Date(0), ctime: new Date(0), blksize: 4096, blocks: 0 },
  });
  const lookup = () => {
    throw new fs.ErrnoError(NO_SUCH_FILE);
  };
  const streams = {
    read(_: unknown, into: Uint8Array, offset: number, length: number, position: number): number {
      const count = Math.min(length, sizeBytes - position);
      if (count <= 0) return 0;
      try {
        return readSync(descriptor, into, offset, count, position);
      } catch (cause) {
        diskError = cause;
        throw cause;
      }
    },
    llseek: (stream: { position: number }, offset: number, whence: number): number =>
      offset + [0, stream.position, sizeBytes][whence]!,
  };
  const oneFile = {
    mount() {
      const root = fs.createNode(null, '/', FOLDER | 0o555, 0);
      root.node_ops = { getattr: attributes, lookup };
      root.stream_ops = {};
      const file = fs.createNode(root, 'stack.h5', REGULAR | 0o444, 0);
      Object.assign(file, { size: sizeBytes, node_ops: { getattr: attributes }, stream_ops: streams });
      return root;
    },
  };
  fs.mkdir('/given');
  fs.mount(oneFile, {}, '/given');
  return {
    path: '/given/stack.h5',
    sizeBytes,
    diskError: () => diskError,
    close: () => closeSync(descriptor),
  };
}
