import { inspectStack as inspect } from '@/stacks/inspect-stack';
import { indexPages } from '@/stacks/prepare-stack';
import type { InspectProgress, StackReport } from '@/stacks/stack-report';
import { refusedReport } from '@/stacks/refused-report';
import { StackRefusal } from '@/stacks/refusal';
import type { IndexOutput, InspectInput } from '../tasks';
import { checkSha256 } from './check-sha256';
import { makePreviews } from './make-previews';
import type { WorkContext } from './work-context';

/** Where each part of the check begins on the way from 0 to 1, and its share. */
const SPAN: Record<InspectProgress['stage'], [number, number]> = {
  pages: [0.1, 0.1],
  frames: [0.2, 0.6],
  checksum: [0.8, 0.1],
};

/** Compares checksums, judges the stack, writes its index, makes previews. A damaged copy is told as such. */
export async function inspectStack(input: InspectInput, { onProgress }: WorkContext): Promise<StackReport> {
  const { source, outDir, usePages, channel } = input;
  const differs = await checkSha256(source, input.expectedSha256);
  if (differs) return refusedReport(new StackRefusal('CHECKSUM', differs));
  const report = await inspect(source, outDir, {
    usePages,
    channel,
    onProgress: ({ stage, done, of }) =>
      onProgress(SPAN[stage][0] + SPAN[stage][1] * (of > 0 ? done / of : 0)),
  });
  if (report.state === 'ready' && input.previews) {
    const { pixelSizeM, frameIntervalS } = input.scale ?? report.metadata;
    await makePreviews(outDir, { contrast: report.imageQuality.contrast, pixelSizeM, frameIntervalS });
  }
  return report;
}

/** Only the page list: enough to read frames by, while another process checks them. */
export async function indexStack({
  source,
  outDir,
}: Pick<InspectInput, 'source' | 'outDir'>): Promise<IndexOutput> {
  try {
    return { state: 'indexed', ...(await indexPages(source, outDir, {})) };
  } catch (cause) {
    if (cause instanceof StackRefusal) return refusedReport(cause);
    throw cause;
  }
}
