import { fileSource } from './byte-source';
import { collectFrameFile } from './collect-frame-file';
import { frameGaps, framesInOrder } from './frame-files';
import { StackRefusal } from './refusal';
import { shownName } from './sentence';
import { type StackCollector } from './stack-collector';
import { indexedPath } from './stack-index';

interface NamedFile {
  path: string;
  name: string;
}

/**
 * Adds the frames among the files of a folder to the stack, in natural order of their names.
 * @throws StackRefusal with the sentence for the first thing that is wrong.
 */
export async function collectFolder(
  files: readonly NamedFile[],
  outDir: string,
  collector: StackCollector,
  signal?: AbortSignal,
): Promise<void> {
  const frames = framesInOrder(files, { code: 'FOLDER_CONTENT', name: 'folder' });
  frames.forEach(({ name }, i) => {
    if (name === frames[i - 1]?.name) {
      throw new StackRefusal('FOLDER_CONTENT', `File '${shownName(name)}' appears twice.`);
    }
  });
  for (const { path, name } of frames) {
    signal?.throwIfAborted();
    if (collector.isFull) break;
    const bytes = await fileSource(path);
    const source =
      collector.sources.push({ path: indexedPath(outDir, path), sizeBytes: bytes.sizeBytes }) - 1;
    await collectFrameFile(bytes, collector, { source, entry: null, fileName: name });
  }
  const gaps = frameGaps(frames.slice(0, collector.pages).map(({ name }) => name));
  if (gaps) collector.warnings.push(gaps);
}
