import { assertInside } from '../byte-source';
import { chunkBytes, chunkGrid } from '../chunk-grid';
import { COMPRESSION } from '../frame-layout';
import { STACK_LIMITS } from '../limits';
import { StackRefusal } from '../refusal';
import { mergeSegments, type Segments } from '../segments';
import { grouped } from '../sentence';
import { type TiffPage } from './read-page';
import { TAG } from './tiff-tags';
import { type TiffDirectory, type TiffFile } from './tiff-file';

/** No codec here makes data longer than this: what a strip claims beyond is never read into memory. */
const CODED_FACTOR_MAX = 2;
const CODED_EXTRA_BYTES = 64;

function shortPage(page: number, needed: number, held: number): StackRefusal {
  return new StackRefusal(
    'STRIP_SHORT',
    `Page ${page} needs ${grouped(needed)} bytes but holds ${grouped(held)}.`,
  );
}

/** Strips or tiles of the planes that are read: where each begins, and how many bytes it says it has. */
async function chunkTable(
  file: TiffFile,
  directory: TiffDirectory,
  { layout, storedPlanes }: TiffPage,
  perPlane: number,
) {
  const { fields } = directory;
  const all = perPlane * storedPlanes;
  const offsets = await file.readNumbers(fields.get(layout.tiled ? TAG.tileOffsets : TAG.stripOffsets), all);
  const counts = await file.readNumbers(
    fields.get(layout.tiled ? TAG.tileByteCounts : TAG.stripByteCounts),
    all,
  );
  if (storedPlanes === 1 || layout.channel === 'mean') return { offsets, counts };
  const from = Number(layout.channel) * perPlane;
  return { offsets: offsets.slice(from, from + perPlane), counts: counts.slice(from, from + perPlane) };
}

/**
 * Where a page's data lies. Uncompressed strips that follow each other are merged.
 * @param page number in the stack, from 1, for the sentences
 * @throws StackRefusal STRIP_SHORT when the sizes given are too small for the image; OutOfRangeError
 *   when data lies outside the file.
 */
export async function pageSegments(
  file: TiffFile,
  directory: TiffDirectory,
  described: TiffPage,
  page: number,
): Promise<Segments> {
  const { layout, facts } = described;
  const grid = chunkGrid(layout, facts.width, facts.height);
  const perPlane = grid.across * grid.down;
  if (perPlane * described.storedPlanes > STACK_LIMITS.segmentsPerPage) {
    throw new StackRefusal('TOO_MANY_STRIPS', `Page ${page} is cut into ${grouped(perPlane)} pieces.`);
  }
  const { offsets, counts } = await chunkTable(file, directory, described, perPlane);
  const plain = layout.compression === COMPRESSION.none;
  const lengths = new Float64Array(perPlane * layout.planes);
  let [needed, held, complete] = [0, 0, true];
  for (let i = 0; i < lengths.length; i++) {
    const need = chunkBytes(layout, facts.height, Math.floor((i % perPlane) / grid.across));
    // Without sizes, uncompressed data must be as long as the image needs.
    const given = i >= offsets.length ? 0 : (counts[i] ?? (plain && counts.length === 0 ? need : 0));
    lengths[i] = Math.min(given, plain ? need : CODED_FACTOR_MAX * need + CODED_EXTRA_BYTES);
    needed += need;
    held += Math.min(given, need);
    complete &&= plain ? given >= need : given > 0;
  }
  if (!complete) throw shortPage(page, needed, held);
  for (let i = 0; i < lengths.length; i++) assertInside(file, offsets[i]!, lengths[i]!);
  const segments = { offsets, lengths };
  return plain && !layout.tiled && layout.planes === 1 ? mergeSegments(segments) : segments;
}
