import { crc32 } from '@/stacks/crc32';
import { deflateRawSync } from 'node:zlib';

export interface ZipFileOptions {
  name: string;
  data: Uint8Array;
  /** 0 stored, 8 deflated. */
  method?: number;
  /** Size that the archive claims instead of the true one. */
  declaredBytes?: number;
  /** Unix file type and rights. */
  mode?: number;
  encrypted?: boolean;
}

/** A ZIP archive as APPNOTE 4.3 lays it out: local headers and data, the directory, the end record. */
export function writeZip(files: readonly ZipFileOptions[]): Buffer {
  const local: Buffer[] = [];
  const central: Buffer[] = [];
  let at = 0;
  for (const { name, data, method = 8, declaredBytes = data.length, mode = 0o100644, encrypted } of files) {
    const stored = method === 8 ? deflateRawSync(data, { level: 9 }) : Buffer.from(data);
    const nameBytes = Buffer.from(name, 'utf8');
    const common = Buffer.alloc(26);
    common.writeUInt16LE(20, 0);
    common.writeUInt16LE(0x800 | (encrypted ? 1 : 0), 2);
    common.writeUInt16LE(method, 4);
    common.writeUInt32LE(crc32(data), 10);
    common.writeUInt32LE(stored.length, 14);
    common.writeUInt32LE(declaredBytes, 18);
    common.writeUInt16LE(nameBytes.length, 22);
    const localHead = Buffer.concat([Buffer.from('PK\x03\x04', 'latin1'), common, nameBytes, stored]);
    const tail = Buffer.alloc(14);
    tail.writeUInt32LE((mode << 16) >>> 0, 6);
    tail.writeUInt32LE(at, 10);
    const madeBy = Buffer.from([20, 3]);
    central.push(Buffer.concat([Buffer.from('PK\x01\x02', 'latin1'), madeBy, common, tail, nameBytes]));
    local.push(localHead);
    at += localHead.length;
  }
  const directory = Buffer.concat(central);
  const end = Buffer.alloc(22);
  end.write('PK\x05\x06', 'latin1');
  end.writeUInt16LE(files.length, 8);
  end.writeUInt16LE(files.length, 10);
  end.writeUInt32LE(directory.length, 12);
  end.writeUInt32LE(at, 16);
  return Buffer.concat([...local, directory, end]);
}
