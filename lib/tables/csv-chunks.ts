/** Lines of a table end as RFC 4180 says. */
export const LINE_END = '\r\n';

/** Rows are handed on in pieces of about this many characters. */
const CHUNK_CHARACTERS = 1 << 16;

/** Header, then rows, joined into larger pieces for streaming. The bytes don't depend on the pieces. */
export function* csvChunks(columns: string, rows: Iterable<string>): Generator<string> {
  let chunk = columns + LINE_END;
  for (const row of rows) {
    chunk += row + LINE_END;
    if (chunk.length >= CHUNK_CHARACTERS) {
      yield chunk;
      chunk = '';
    }
  }
  if (chunk !== '') yield chunk;
}
