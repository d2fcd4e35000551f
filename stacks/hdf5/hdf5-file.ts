import { type Hdf5Module, type Hdf5Type, newHdf5Module } from './hdf5-module';
import { mountOneFile, type MountedFile } from './one-file-mount';

/** Longer attributes say nothing that we look for, bytes. */
const ATTRIBUTE_BYTES_MAX = 65_536;
const TEXT = 3;

/** A file that HDF5 can't make sense of. */
export class Hdf5Error extends RangeError {
  override name = 'Hdf5Error';
}

/** An open file. All of its methods throw Hdf5Error for damage, and errors of the disk as they are. */
export class Hdf5File {
  private constructor(
    private readonly library: Hdf5Module,
    private readonly mounted: MountedFile,
    private readonly said: string[],
    private readonly id: bigint,
  ) {}

  /** @throws Hdf5Error with what the library says when it can't be opened */
  static async open(path: string): Promise<Hdf5File> {
    const said: string[] = [];
    const library = await newHdf5Module((line) => said.length < 200 && said.push(line));
    const mounted = mountOneFile(library.FS, path);
    const file = new Hdf5File(library, mounted, said, 0n);
    try {
      const id = file.ask(() => library.open(mounted.path, library.H5F_ACC_RDONLY, false, -1, -1));
      if (id <= 0n) throw new Hdf5Error(said.join('\n'));
      return new Hdf5File(library, mounted, said, id);
    } catch (cause) {
      mounted.close();
      throw cause;
    }
  }

  get sizeBytes(): number {
    return this.mounted.sizeBytes;
  }

  /** Paths of what a group holds. */
  children(group: string): string[] {
    const names = this.ask(() => this.library.get_names(this.id, group, false));
    return names.map((name) => `${group === '/' ? '' : group}/${name}`);
  }

  /** What stands at a path, links followed as long as they stay inside the file. */
  kindOf(path: string): 'group' | 'array' | null {
    const kind = this.ask(() => this.library.get_type(this.id, path));
    if (kind === this.library.H5G_GROUP) return 'group';
    return kind === this.library.H5G_DATASET ? 'array' : null;
  }

  /** The same for all paths that lead to the same thing. */
  identityOf(path: string): string {
    return this.ask(() => Buffer.from(this.library.create_object_reference(this.id, path)).toString('hex'));
  }

  /** An attribute that is one text or one number; null for any other, and where there is none. */
  attribute(path: string, name: string): string | number | null {
    return this.ask(() => {
      if (!this.library.get_attribute_names(this.id, path).includes(name)) return null;
      const type = this.library.get_attribute_metadata(this.id, path, name);
      if (!type.shape || type.total_size !== 1 || type.size > ATTRIBUTE_BYTES_MAX) return null;
      const bytes = this.withRoom(type.size, (at) => {
        if (this.library.get_attribute_data(this.id, path, name, BigInt(at)) < 0) return null;
        if (type.type === TEXT && type.vlen) {
          const [text] = new Uint32Array(this.library.HEAPU8.buffer, at, 1);
          return this.library.UTF8ToString(text!);
        }
        return this.library.HEAPU8.slice(at, at + type.size);
      });
      return bytes instanceof Uint8Array ? valueOf(bytes, type) : bytes;
    });
  }

  /** Type and shape of an array. */
  typeOf(path: string): Hdf5Type {
    return this.ask(() => this.library.get_dataset_metadata(this.id, path));
  }

  filtersOf(path: string): { id: number; name: string }[] {
    return this.ask(() => this.library.get_dataset_filters(this.id, path));
  }

  /**
   * Frames `[first, first + count)` of an array of (frames, rows, columns), as its samples are stored.
   * @throws Hdf5Error when they can't be unpacked
   */
  readFrames(
    path: string,
    first: number,
    count: number,
    [rows, columns]: [number, number],
    frameBytes: number,
  ) {
    return this.ask(() =>
      this.withRoom(count * frameBytes, (at) => {
        const size = [count, rows, columns].map(BigInt);
        const from = [BigInt(first), 0n, 0n];
        const status = this.library.get_dataset_data(this.id, path, size, from, [1n, 1n, 1n], BigInt(at));
        if (status < 0) throw new Hdf5Error(this.said.join('\n'));
        return this.library.HEAPU8.slice(at, at + count * frameBytes);
      }),
    );
  }

  close(): void {
    try {
      this.library.close_file(this.id);
    } catch {
      // A library that has failed keeps nothing but its own memory.
    }
    this.mounted.close();
  }

  private withRoom<T>(bytes: number, work: (at: number) => T): T {
    const at = this.library._malloc(bytes);
    if (at === 0) throw new Hdf5Error(`${bytes} bytes are more than there is room for.`);
    const result = work(at);
    this.library._free(at);
    return result;
  }

  /** Whatever the library throws, traps of its machine code too, says that the file is damaged. */
  private ask<T>(question: () => T): T {
    this.said.length = 0;
    try {
      return question();
    } catch (cause) {
      const diskError = this.mounted.diskError();
      if (diskError) throw diskError;
      if (cause instanceof Hdf5Error) throw cause;
      throw new Hdf5Error(this.said.join('\n') || 'The library failed.', { cause });
    }
  }
}

function valueOf(bytes: Uint8Array, { type, size, signed, littleEndian }: Hdf5Type): string | number | null {
  const view = Buffer.from(bytes);
  if (type === TEXT) return view.toString('utf8').replace(/\0.*$/s, '').trimEnd();
  if (type === 1) {
    if (size === 8) return littleEndian ? view.readDoubleLE() : view.readDoubleBE();
    return size === 4 ? (littleEndian ? view.readFloatLE() : view.readFloatBE()) : null;
  }
  if (type !== 0) return null;
  const whole = littleEndian ? view.reverse() : view;
  const value = BigInt(`0x${whole.toString('hex')}`);
  return Number(signed ? BigInt.asIntN(size * 8, value) : value);
}
