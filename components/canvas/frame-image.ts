import type { Size, ViewBox } from './view-box';

/** Pictures are asked for in widths of this step, so that a zoom does not ask for each in between. */
const WIDTH_STEP_PX = 256;

/**
 * Width in which a frame is worth asking for: what the screen can show of it, in steps; null for
 * the recording's own width.
 */
export function frameRequestWidth(image: Size, view: ViewBox, pixelRatio: number): number | null {
  const shownPx = image.width * view.scale * pixelRatio;
  const stepped = Math.ceil(shownPx / WIDTH_STEP_PX) * WIDTH_STEP_PX;
  return stepped >= image.width ? null : stepped;
}

export interface FrameRequest {
  recordingId: string;
  low: number;
  high: number;
  /** How brightness between black and white is shown; linear when left out. */
  scale?: 'linear' | 'log';
  width: number | null;
}

/** Address of a frame's picture; counts at and below `low` are black, at and above `high` white. */
export function frameUrl(frame: number, { recordingId, low, high, scale, width }: FrameRequest): string {
  const query = new URLSearchParams({ low: String(low), high: String(high) });
  if (width !== null) query.set('width', String(width));
  if (scale === 'log') query.set('scale', scale);
  return `/api/v1/recordings/${recordingId}/frames/${frame}?${query}`;
}

/** Fetches and decodes a frame off the main thread. Rejects with a sentence for a person. */
export async function loadFrame(
  frame: number,
  request: FrameRequest,
  signal: AbortSignal,
): Promise<ImageBitmap> {
  const response = await fetch(frameUrl(frame, request), {
    signal,
    headers: { Accept: 'image/webp,image/png;q=0.9' },
    credentials: 'same-origin',
  });
  if (!response.ok) throw new Error(await sentenceOf(response, frame));
  return createImageBitmap(await response.blob());
}

async function sentenceOf(response: Response, frame: number): Promise<string> {
  try {
    const problem = (await response.json()) as { detail?: unknown };
    if (typeof problem.detail === 'string' && problem.detail) return problem.detail;
  } catch {
    // Not a problem document: the status is all there is to say.
  }
  return `Frame ${frame} could not be read (status ${response.status}).`;
}
