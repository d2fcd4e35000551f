import type { Scene, SceneCapture, SceneEvent } from './scene';

interface Built {
  kind: number;
  line: number;
  frame: number[];
  xPx: number[];
  yPx: number[];
  brightnessE: number[];
}

/** Out of sight for more frames than this, a tracer that comes back counts as another one. */
const SAME_TRACER_GAP_FRAMES = 3;

/** Collects tracers point by point and packs them into a scene, ordered by first frame, y, x. */
export class SceneBuilder {
  private readonly tracers: Built[] = [];

  constructor(
    private readonly widthPx: number,
    private readonly heightPx: number,
    private readonly frames: number,
  ) {}

  /** True where a camera of this size sees the place. */
  sees(xPx: number, yPx: number): boolean {
    return xPx >= -0.5 && yPx >= -0.5 && xPx < this.widthPx - 0.5 && yPx < this.heightPx - 0.5;
  }

  /**
   * Adds what is seen of one particle. `visible[k]` is 0 where it is out of the sheet, 1 where it
   * shines, 2 where it is in the sheet but dark for a moment.
   *
   * @returns the numbers of the tracers made of it, for `build`'s events.
   */
  add(
    kind: number,
    line: number,
    xPx: ArrayLike<number>,
    yPx: ArrayLike<number>,
    visible: ArrayLike<number>,
    brightnessE: number,
  ): number[] {
    const made: number[] = [];
    let open: Built | null = null;
    let lastSeen = -Infinity;
    for (let k = 0; k < this.frames; k++) {
      if (visible[k] === 0 || !this.sees(xPx[k], yPx[k])) continue;
      if (!open || k - lastSeen > SAME_TRACER_GAP_FRAMES) {
        open = { kind, line, frame: [], xPx: [], yPx: [], brightnessE: [] };
        made.push(this.tracers.length);
        this.tracers.push(open);
      }
      lastSeen = k;
      if (visible[k] === 2) continue;
      open.frame.push(k);
      open.xPx.push(xPx[k]);
      open.yPx.push(yPx[k]);
      open.brightnessE.push(brightnessE);
    }
    return made;
  }

  /** The one of some tracers that is seen in a frame, or undefined. */
  seenIn(numbers: readonly number[], frame: number): number | undefined {
    return numbers.find((number) => {
      const { frame: frames } = this.tracers[number];
      return frames[0] <= frame && frame <= frames[frames.length - 1];
    });
  }

  build(lineDensityM2: number, events: SceneEvent[], captures: SceneCapture[] = []): Scene {
    const order = this.tracers
      .map((tracer, number) => ({ tracer, number }))
      .filter(({ tracer }) => tracer.frame.length > 0)
      .sort(
        (a, b) =>
          a.tracer.frame[0] - b.tracer.frame[0] ||
          a.tracer.yPx[0] - b.tracer.yPx[0] ||
          a.tracer.xPx[0] - b.tracer.xPx[0] ||
          a.number - b.number,
      );
    const place = new Map(order.map(({ number }, index) => [number, index]));
    const start = new Uint32Array(order.length + 1);
    order.forEach(({ tracer }, i) => (start[i + 1] = start[i] + tracer.frame.length));
    const points = start[order.length];
    const scene: Scene = {
      widthPx: this.widthPx,
      heightPx: this.heightPx,
      frames: this.frames,
      tracers: order.length,
      start,
      frame: new Uint32Array(points),
      xPx: new Float32Array(points),
      yPx: new Float32Array(points),
      brightnessE: new Float32Array(points),
      kind: Uint8Array.from(order, ({ tracer }) => tracer.kind),
      line: Int32Array.from(order, ({ tracer }) => tracer.line),
      events: events.flatMap((event) => {
        const tracerA = place.get(event.tracerA);
        const tracerB = place.get(event.tracerB);
        return tracerA === undefined || tracerB === undefined ? [] : [{ ...event, tracerA, tracerB }];
      }),
      captures: captures.flatMap((capture) => {
        const tracer = place.get(capture.tracer);
        return tracer === undefined ? [] : [{ ...capture, tracer }];
      }),
      lineDensityM2,
    };
    order.forEach(({ tracer }, i) => {
      scene.frame.set(tracer.frame, start[i]);
      scene.xPx.set(tracer.xPx, start[i]);
      scene.yPx.set(tracer.yPx, start[i]);
      scene.brightnessE.set(tracer.brightnessE, start[i]);
    });
    return scene;
  }
}
