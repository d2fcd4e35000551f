import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { rootDir } from '@/lib/env';

export interface EmscriptenNode {
  id: number;
  mode: number;
  size?: number;
  node_ops?: object;
  stream_ops?: object;
}

/** What we use of the library's file system. */
export interface EmscriptenFs {
  ErrnoError: new (errno: number) => Error;
  mkdir(path: string): void;
  mount(type: object, options: object, at: string): void;
  createNode(parent: EmscriptenNode | null, name: string, mode: number, device: number): EmscriptenNode;
}

/** Type and shape of an array or of an attribute. */
export interface Hdf5Type {
  /** H5T_class_t: 0 whole number, 1 floating point, 3 text. */
  type: number;
  size: number;
  signed: boolean;
  littleEndian: boolean;
  vlen: boolean;
  total_size: number;
  shape: number[] | null;
  chunks?: number[] | null;
  virtual_sources?: unknown[];
}

/** What we use of h5wasm 0.10: the C library of HDF5 with a thin layer over it. Ids and sizes are 64 bits. */
export interface Hdf5Module {
  FS: EmscriptenFs;
  HEAPU8: Uint8Array;
  H5F_ACC_RDONLY: number;
  H5G_GROUP: number;
  H5G_DATASET: number;
  open(path: string, mode: number, trackOrder: boolean, low: number, high: number): bigint;
  close_file(file: bigint): number;
  get_names(file: bigint, group: string, recursive: boolean): string[];
  get_type(file: bigint, path: string): number;
  create_object_reference(file: bigint, path: string): Uint8Array;
  get_attribute_names(file: bigint, path: string): string[];
  get_attribute_metadata(file: bigint, path: string, name: string): Hdf5Type;
  get_attribute_data(file: bigint, path: string, name: string, to: bigint): number;
  get_dataset_metadata(file: bigint, path: string): Hdf5Type;
  get_dataset_filters(file: bigint, path: string): { id: number; name: string }[];
  get_dataset_data(
    file: bigint,
    path: string,
    count: bigint[],
    offset: bigint[],
    strides: bigint[],
    to: bigint,
  ): number;
  UTF8ToString(at: number): string;
  _malloc(bytes: number): number;
  _free(at: number): void;
}

type Factory = (options: { noInitialRun: boolean; printErr: (line: string) => void }) => Promise<Hdf5Module>;

/**
 * An instance of the library with memory of its own: what a damaged file does to it touches no other
 * file, and all of it is gone with the file. The package offers only one instance for all, and the other
 * build of it sees the whole disk, so its module is loaded by its place.
 * @param printErr hears what the library says about failures, line by line
 */
export async function newHdf5Module(printErr: (line: string) => void): Promise<Hdf5Module> {
  const path = join(
    /* turbopackIgnore: true */ rootDir(),
    'node_modules',
    'h5wasm',
    'dist',
    'esm',
    'hdf5_util.js',
  );
  const { href } = pathToFileURL(path);
  const { default: factory } = (await import(/* turbopackIgnore: true */ /* @vite-ignore */ href)) as {
    default: Factory;
  };
  return factory({ noInitialRun: true, printErr });
}
