import { FrameCache } from './frame-cache';
import { frameRequestWidth, loadFrame, type FrameRequest } from './frame-image';
import type { Size } from './view-box';
import type { ViewerState } from './viewer-store';

/** A dragged contrast bead asks for new pictures only where it rests this long. */
const REST_MS = 90;

const keyOf = ({ low, high, scale, width }: FrameRequest) => `${low} ${high} ${scale} ${width}`;

/**
 * Pictures of a recording at the contrast and zoom of the moment. When those change, the pictures
 * of before stay on screen until the new one of the shown frame is there.
 */
export class FramePictures {
  private current: FrameCache<ImageBitmap> | null = null;
  private retiring: FrameCache<ImageBitmap> | null = null;
  private key = '';
  private timer: ReturnType<typeof setTimeout> | undefined;
  private frame = 0;
  private direction: 1 | -1 = 1;

  constructor(
    private readonly recordingId: string,
    private readonly image: Size,
    private readonly frames: number,
    private readonly onChange: () => void,
  ) {}

  /** Follows the viewer: to be called whenever its state changes. */
  follow(state: ViewerState, pixelRatio: number): void {
    if (!state.view) return;
    this.frame = state.frame;
    this.direction = state.direction;
    const width = frameRequestWidth(this.image, state.view, pixelRatio);
    const { low, high, brightness: scale } = state;
    const request = { recordingId: this.recordingId, low, high, scale, width };
    if (keyOf(request) === this.key) {
      this.current?.want(state.frame, state.direction);
      return;
    }
    this.key = keyOf(request);
    clearTimeout(this.timer);
    if (this.current) this.timer = setTimeout(() => this.change(request), REST_MS);
    else this.change(request);
  }

  picture(frame: number): ImageBitmap | null {
    return this.current?.get(frame) ?? this.retiring?.get(frame) ?? null;
  }

  failure(frame: number): Error | null {
    return this.current?.failure(frame) ?? null;
  }

  retry(frame: number): void {
    this.current?.retry(frame);
  }

  close(): void {
    clearTimeout(this.timer);
    this.current?.close();
    this.retiring?.close();
  }

  private change(request: FrameRequest): void {
    this.retiring?.close();
    this.retiring = this.current;
    const next: FrameCache<ImageBitmap> = new FrameCache({
      frames: this.frames,
      load: (frame, signal) => loadFrame(frame, request, signal),
      onChange: (frame) => {
        if (this.current === next && frame === this.frame && next.get(frame)) {
          this.retiring?.close();
          this.retiring = null;
        }
        this.onChange();
      },
    });
    this.current = next;
    next.want(this.frame, this.direction);
  }
}
