import { LabError, notFound } from '@/lib/errors';
import type { FrameQuery } from '@/lib/schemas/recording';
import { models } from '@/models';
import type { Recording } from '@/models/recording';
import { encodePreview } from '@/stacks/preview';
import { withStack } from './open-stacks';

/** Frames of a recording never change; who may see them can, so no shared cache keeps them. */
const CACHE = 'private, max-age=86400, immutable';
const VARY = 'Accept, Authorization, Cookie';

/** A recording whose frames can be shown. @throws LabError NOT_FOUND, STATE */
export async function shownRecording(labId: string, recordingId: string): Promise<Recording> {
  const recording = await models().Recording.findOne({ where: { id: recordingId, labId } });
  if (!recording) throw notFound('recording');
  if (recording.state !== 'ready') {
    throw new LabError('STATE', `There are no frames to show: the recording is ${recording.state}.`);
  }
  return recording;
}

/** A frame as a grey picture between two counts, or 304 where the browser has it already. */
export async function framePicture(
  request: Request,
  recording: Recording,
  frameText: string,
  query: FrameQuery,
): Promise<Response> {
  const frame = /^\d{1,7}$/.test(frameText) ? Number(frameText) : NaN;
  if (!(frame < (recording.frames ?? 0))) throw notFound('frame');
  const format = prefersPng(request.headers.get('accept')) ? 'png' : 'webp';
  const { low, high } = contrastOf(recording, query);
  const width = query.width ?? recording.width ?? undefined;
  const scale = query.scale ?? 'linear';
  const etag = `"${recording.id}-${frame}-${low}-${high}-${scale}-${width ?? 0}-${format}"`;
  const headers = { ETag: etag, 'Cache-Control': CACHE, Vary: VARY };
  if (matches(request.headers.get('if-none-match'), etag))
    return new Response(null, { status: 304, headers });
  const picture = await withStack(recording.id, recording.usePages ?? 0, async (stack) =>
    encodePreview(await readable(stack.readFrame(frame), frame), { low, high, scale, width, format }),
  );
  return new Response(new Uint8Array(picture), {
    headers: { ...headers, 'Content-Type': `image/${format}`, 'Content-Length': String(picture.length) },
  });
}

function contrastOf({ imageQuality }: Recording, query: FrameQuery): { low: number; high: number } {
  const low = query.low ?? imageQuality?.low ?? 0;
  const high = query.high ?? imageQuality?.high ?? 65_535;
  return { low, high: Math.max(low, high) };
}

/** The stack was whole when it was checked; a frame that can't be read now was damaged since. */
async function readable<T>(frame: Promise<T>, number: number): Promise<T> {
  try {
    return await frame;
  } catch (cause) {
    throw new LabError(
      'UNAVAILABLE',
      `Frame ${number} can't be read: the stored file is damaged or missing.`,
      { cause },
    );
  }
}

/** WebP unless the reader names PNG and not WebP, or ranks PNG higher. */
export function prefersPng(accept: string | null): boolean {
  const quality = (type: string): number => {
    for (const part of (accept ?? '').split(',')) {
      const [name, ...parameters] = part.split(';').map((text) => text.trim().toLowerCase());
      if (name !== type) continue;
      const q = parameters.find((parameter) => parameter.startsWith('q='));
      return q ? Number(q.slice(2)) || 0 : 1;
    }
    return -1;
  };
  return quality('image/png') > Math.max(quality('image/webp'), 0);
}

const matches = (header: string | null, etag: string): boolean =>
  (header ?? '').split(',').some((tag) => tag.trim().replace(/^W\//, '') === etag || tag.trim() === '*');
