import { open } from 'node:fs/promises';
import { basename } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import type { PatientClient } from '@/scripts/endure/patient-client';

const PIECE_BYTES = 8 * 2 ** 20;
const VERSION = { 'tus-resumable': '1.0.0' };
const base64 = (text: string) => Buffer.from(text).toString('base64');

/** Sends a file in pieces as a browser does, never more than one piece in memory. @returns the recording, once ready */
export async function sendStack(
  client: PatientClient,
  runId: string,
  path: string,
  bytes: number,
  onSent: () => void = () => undefined,
): Promise<string> {
  const metadata = `filename ${base64(basename(path))},run ${base64(runId)}`;
  const headers = { ...VERSION, 'upload-length': String(bytes), 'upload-metadata': metadata };
  const begun = await client.askPatiently('/api/v1/uploads', { method: 'POST', headers });
  const location = begun.headers.get('location') ?? '';
  const recordingId = begun.headers.get('beadline-recording') ?? '';
  const file = await open(path, 'r');
  try {
    const piece = Buffer.alloc(PIECE_BYTES);
    for (let offset = 0; offset < bytes;) {
      const { bytesRead } = await file.read(piece, 0, PIECE_BYTES, offset);
      const answer = await client.askPatiently(location, {
        method: 'PATCH',
        headers: {
          ...VERSION,
          'content-type': 'application/offset+octet-stream',
          'upload-offset': String(offset),
        },
        body: new Uint8Array(piece.subarray(0, bytesRead)),
      });
      if (answer.status !== 204)
        throw new Error(`A piece was answered ${answer.status}: ${answer.body.toString()}`);
      offset = Number(answer.headers.get('upload-offset'));
    }
  } finally {
    await file.close();
  }
  onSent();
  for (;;) {
    const { state, refusal } = await client.json<{ state: string; refusal: unknown }>(
      `/api/v1/recordings/${recordingId}`,
    );
    if (state === 'ready') return recordingId;
    if (state === 'refused') throw new Error(`The stack was refused: ${JSON.stringify(refusal)}`);
    await pause(500);
  }
}
