import { ByteWindow } from '../byte-window';
import { type ByteSource } from '../byte-source';
import { TYPE_BYTES } from './tiff-tags';

/** A field of a page: its values stand at byte `at` of the file, wherever the writer put them. */
export interface TiffField {
  type: number;
  count: number;
  at: number;
  /** The first value when it is a whole number that stands in the directory itself, else null. */
  first: number | null;
}

export interface TiffDirectory {
  offset: number;
  /** First byte after the directory itself. */
  end: number;
  fields: Map<number, TiffField>;
  /** Byte of the next page's directory, 0 after the last page. */
  next: number;
}

/** BYTE, SHORT, LONG, IFD, and the 64-bit ones. */
const WHOLE_NUMBERS = new Set([1, 3, 4, 13, 16, 18]);

/** Real pages have a few dozen fields; overlapping lists of very many would take hours to walk. */
const FIELDS_MAX = 1_000;

/** A directory whose own numbers make no sense. */
export class DirectoryError extends RangeError {}

/**
 * Walks the page directories of a classic or big TIFF file of either byte order. Nothing is decoded
 * here, no number is trusted: reads outside the file throw `OutOfRangeError`.
 */
export class TiffFile {
  private constructor(
    private readonly window: ByteWindow,
    readonly littleEndian: boolean,
    readonly big: boolean,
    /** Byte of the first page's directory; 0 when there are no pages. */
    readonly firstDirectory: number,
  ) {}

  get sizeBytes(): number {
    return this.window.source.sizeBytes;
  }

  /** @throws OutOfRangeError when the file is shorter than a header. */
  static async open(source: ByteSource): Promise<TiffFile> {
    const window = new ByteWindow(source);
    const head = await window.view(0, 8);
    const littleEndian = head.getUint8(0) === 0x49;
    const big = head.getUint16(2, littleEndian) === 43;
    const first = big
      ? Number((await window.view(8, 8)).getBigUint64(0, littleEndian))
      : head.getUint32(4, littleEndian);
    return new TiffFile(window, littleEndian, big, first);
  }

  /** @throws OutOfRangeError when it is cut by the end of the file; DirectoryError when absurd. */
  async readDirectory(offset: number): Promise<TiffDirectory> {
    const [countBytes, fieldBytes, pointerBytes] = this.big ? [8, 20, 8] : [2, 12, 4];
    const head = await this.window.view(offset, countBytes);
    const count = this.big
      ? Number(head.getBigUint64(0, this.littleEndian))
      : head.getUint16(0, this.littleEndian);
    if (count > FIELDS_MAX) throw new DirectoryError(`A page with ${count} fields.`);
    const body = await this.window.view(offset + countBytes, count * fieldBytes + pointerBytes);
    const fields = new Map<number, TiffField>();
    for (let i = 0; i < count; i++) {
      const tag = body.getUint16(i * fieldBytes, this.littleEndian);
      const field = this.parseField(body, i * fieldBytes, offset + countBytes + i * fieldBytes);
      if (field && !fields.has(tag)) fields.set(tag, field);
    }
    const end = offset + countBytes + count * fieldBytes + pointerBytes;
    return { offset, end, fields, next: this.pointer(body, count * fieldBytes) };
  }

  /**
   * The first `most` values of a field of whole numbers.
   * @returns an empty array for fields of other types.
   * @throws OutOfRangeError when they stand outside the file.
   */
  async readNumbers(field: TiffField | undefined, most = Infinity): Promise<Float64Array> {
    if (!field || !WHOLE_NUMBERS.has(field.type)) return new Float64Array(0);
    if (field.first !== null && (field.count === 1 || most === 1)) return Float64Array.of(field.first);
    const size = TYPE_BYTES[field.type]!;
    const count = Math.min(field.count, most);
    const view = await this.window.view(field.at, count * size);
    const values = new Float64Array(count);
    for (let i = 0; i < count; i++) values[i] = this.number(view, i * size, size);
    return values;
  }

  /** The text of a field without its closing zero bytes. The caller has checked `count`. */
  async readText(field: TiffField): Promise<string> {
    const view = await this.window.view(field.at, field.count);
    const bytes = new Uint8Array(view.buffer, view.byteOffset, view.byteLength);
    return Buffer.from(bytes)
      .toString('utf8')
      .replace(/\0[\s\S]*$/, '');
  }

  private parseField(body: DataView, at: number, fieldOffset: number): TiffField | null {
    const type = body.getUint16(at + 2, this.littleEndian);
    const size = TYPE_BYTES[type];
    if (size === undefined) return null;
    const count = this.big
      ? Number(body.getBigUint64(at + 4, this.littleEndian))
      : body.getUint32(at + 4, this.littleEndian);
    const inlineBytes = this.big ? 8 : 4;
    const valueAt = at + 4 + inlineBytes;
    if (count * size > inlineBytes) return { type, count, at: this.pointer(body, valueAt), first: null };
    const isNumber = count > 0 && WHOLE_NUMBERS.has(type);
    const first = isNumber ? this.number(body, valueAt, size) : null;
    return { type, count, at: fieldOffset + 4 + inlineBytes, first };
  }

  private number(view: DataView, at: number, size: number): number {
    if (size === 1) return view.getUint8(at);
    if (size === 2) return view.getUint16(at, this.littleEndian);
    if (size === 4) return view.getUint32(at, this.littleEndian);
    return Number(view.getBigUint64(at, this.littleEndian));
  }

  private pointer(view: DataView, at: number): number {
    return this.big
      ? Number(view.getBigUint64(at, this.littleEndian))
      : view.getUint32(at, this.littleEndian);
  }
}
