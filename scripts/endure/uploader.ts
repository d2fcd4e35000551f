import { createHash } from 'node:crypto';
import { setTimeout as pause } from 'node:timers/promises';
import type { Random } from '@/tracking/random';
import { pick, type Client, type Load } from './load';
import { askAgain } from './own-analysis';
import type { ReferenceStack } from './stacks';

const VERSION = { 'tus-resumable': '1.0.0' };
const PIECE_LEAST = 20_000;
const PIECE_MOST = 900_000;
const ABORT_SHARE = 0.15;
const READY_WITHIN_MS = 240_000;

interface RecordingAnswer {
  state: 'arriving' | 'checking' | 'ready' | 'refused';
  sha256: string | null;
  refusal: { code: string; detail: string } | null;
}

const base64 = (text: string) => Buffer.from(text).toString('base64');

/** Sends stacks in pieces, breaks off now and then, and holds the server to every offset that it has named. */
export const uploader: Client = async (load, random) => {
  while (!load.isOver()) {
    const stack = pick(load.stacks, random);
    const begun = await begin(load, stack, random);
    if (!begun || !(await sendAll(load, stack, begun.location, random))) continue;
    load.ledger.count('uploads acknowledged');
    await untilReady(load, stack, begun.recordingId);
  }
};

async function begin({ client, runId }: Load, stack: ReferenceStack, random: Random) {
  const entries = {
    filename: stack.name,
    run: runId,
    ...(random.uniform() < 0.5 ? { sha256: stack.sha256 } : {}),
  };
  const metadata = Object.entries(entries)
    .map(([key, value]) => `${key} ${base64(value)}`)
    .join(',');
  const headers = { ...VERSION, 'upload-length': String(stack.bytes.length), 'upload-metadata': metadata };
  const answer = await client.ask('/api/v1/uploads', { method: 'POST', headers });
  if (answer?.status !== 201) return void (await pause(300));
  return {
    location: answer.headers.get('location') ?? '',
    recordingId: answer.headers.get('beadline-recording') ?? '',
  };
}

async function sendAll({ client, ledger }: Load, stack: ReferenceStack, location: string, random: Random) {
  let acknowledged = 0;
  while (acknowledged < stack.bytes.length) {
    const head = await client.askPatiently(location, { method: 'HEAD', headers: VERSION });
    const offset = Number(head.headers.get('upload-offset') ?? NaN);
    if (head.status !== 200 || !(offset >= acknowledged)) {
      ledger.broken(
        `upload ${location}: ${acknowledged} bytes were acknowledged, HEAD says ${head.status}, ${offset}`,
      );
      return false;
    }
    if (offset === stack.bytes.length) return true;
    const length = PIECE_LEAST + random.integer(PIECE_MOST - PIECE_LEAST);
    const piece = Uint8Array.from(stack.bytes.subarray(offset, offset + length));
    const breaksOff = random.uniform() < ABORT_SHARE;
    const answer = await client.ask(location, {
      method: 'PATCH',
      headers: {
        ...VERSION,
        'content-type': 'application/offset+octet-stream',
        'upload-offset': String(offset),
        ...(random.uniform() < 0.5 ? { 'upload-checksum': checksumOf(piece) } : {}),
      },
      body: breaksOff ? brokenBody(piece) : piece,
      ...(breaksOff ? { duplex: 'half' } : {}),
    } as RequestInit);
    if (breaksOff) ledger.count('pieces broken off by the client');
    if (answer?.status === 204) {
      acknowledged = Number(answer.headers.get('upload-offset'));
      ledger.count('pieces acknowledged');
    } else if (answer?.status === 460 || answer?.status === 400) {
      ledger.broken(
        `upload ${location}: a good piece was answered ${answer.status} ${answer.body.toString()}`,
      );
      return false;
    } else await pause(250);
  }
  return true;
}

const checksumOf = (piece: Uint8Array) => `sha256 ${createHash('sha256').update(piece).digest('base64')}`;

/** Half of the piece, and then the line goes dead. */
function brokenBody(piece: Uint8Array): ReadableStream<Uint8Array> {
  return new ReadableStream({
    async start(controller) {
      controller.enqueue(piece.subarray(0, piece.length >> 1));
      await pause(50);
      controller.error(new Error('broken off'));
    },
  });
}

async function untilReady(load: Load, stack: ReferenceStack, id: string) {
  const { client, ledger, recordings } = load;
  const end = Date.now() + READY_WITHIN_MS;
  for (;;) {
    const now = await client.json<RecordingAnswer>(`/api/v1/recordings/${id}`);
    if (now.state === 'ready') {
      if (now.sha256 !== stack.sha256)
        ledger.broken(`recording ${id} has other bytes than were sent: ${now.sha256}`);
      recordings.push({ id, stack, asked: 0 });
      return ledger.count('recordings checked');
    }
    // The check lost three workers and was given up: that is no word about the stack.
    if (now.state === 'refused' && now.refusal?.code === 'CHECK_FAILED') await askAgain(load, id);
    else if (now.state === 'refused')
      return ledger.broken(`recording ${id} was refused: ${JSON.stringify(now.refusal)}`);
    if (Date.now() > end)
      return ledger.broken(`recording ${id} is still ${now.state} after ${READY_WITHIN_MS / 1000} s`);
    await pause(500);
  }
}
