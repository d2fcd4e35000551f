import { models } from '@/models';
import type { Recording } from '@/models/recording';
import type { StackSource } from '@/stacks/stack-report';
import { folderFile, stackFile } from './stack-folder';

/** Where the bytes of a recording lie, under the names that its sender gave, and the sender's checksums. */
export async function sourceOf(
  recording: Recording,
): Promise<{ source: StackSource; expectedSha256: (string | null)[] }> {
  const { id, labId, name, kind, clientSha256 } = recording;
  if (kind === 'file') {
    return { source: { kind: 'file', path: stackFile(id), name }, expectedSha256: [clientSha256] };
  }
  const uploads = await models().Upload.findAll({
    where: { recordingId: id, labId },
    order: [['position', 'ASC']],
  });
  return {
    source: {
      kind: 'folder',
      files: uploads.map((upload, i) => ({
        path: folderFile(id, upload.position ?? i),
        name: upload.filename,
      })),
    },
    expectedSha256: uploads.map((upload) => upload.sha256),
  };
}
