import type { LightLevel } from '../detection/light-level';
import { DARK_VARIANCE_E2 } from '../detection/second-look';
import { edgeCorrection, type SpotKernel } from '../detection/spot-kernel';
import type { Arena } from './arena';
import type { CompiledPlanes, CountScale, FrameKernels, ImageSpec, Peaks } from './kernels';
import { electronScale, electronsOf, type ElectronScale } from './noise-units';
import type { SimdExports } from './simd-exports';
import { createSimdLight } from './simd-light';
import { SimdPainter } from './simd-painter';
import type { SimdPlanes } from './simd-planes';

/**
 * Frames of one size in the memory of an instance. A class, because engines keep what they compiled of its
 * methods from one instance to the next, and forget what they compiled of closures along with the last of them.
 */
export class SimdFrame implements FrameKernels {
  readonly width: number;
  readonly height: number;
  readonly compiled: CompiledPlanes;
  readonly plain = null;
  readonly bad: Uint8Array;
  readonly background: Float32Array;
  readonly response: Float32Array;
  private readonly counts: Float32Array;
  private readonly peaks: Peaks;
  private readonly painter: SimdPainter;
  private readonly lightOf: (scale: ElectronScale, readVariance: number) => LightLevel;
  private electrons: ElectronScale = { offset: 0, perCount: 1, saturationE: Infinity };
  private light: LightLevel = { scale: 1, shift: 0 };
  /** Level of the peaks that were found along with the response; NaN once they were replaced by others. */
  private foundLevel = Number.NaN;

  /** @param arena has grown; `at` are the planes in it */
  constructor(
    private readonly simd: SimdExports,
    arena: Arena,
    private readonly at: SimdPlanes,
    readonly kernel: SpotKernel,
    { width, height }: ImageSpec,
  ) {
    const pixels = width * height;
    this.width = width;
    this.height = height;
    arena.floats(at.weights, kernel.reach + 1).set(kernel.weight);
    arena.floats(at.correctionX, width).set(edgeCorrection(kernel, width));
    arena.floats(at.correctionY, height).set(edgeCorrection(kernel, height));
    this.counts = arena.floats(at.counts, pixels);
    this.bad = arena.bytes(at.bad, pixels);
    this.background = arena.floats(at.background, pixels);
    this.response = arena.floats(at.response, pixels);
    this.peaks = { count: 0, at: arena.integers(at.peaks, at.peaksMost) };
    this.painter = new SimdPainter(simd, arena, at.blockRows, at.paddedWidth, width, height);
    this.lightOf = createSimdLight(simd, arena, at, pixels);
    this.compiled = {
      exports: simd,
      factsAt: at.facts,
      countsAt: at.counts,
      badAt: at.bad,
      backgroundAt: at.background,
      spotLightAt: at.spotLight,
      paintedAt: at.painted,
      scratchAt: at.scratch,
    };
  }

  bareAt(pixel: number): number {
    return Math.max(0, this.light.scale * this.background[pixel] + this.light.shift);
  }

  isUsable(pixel: number): boolean {
    const e = electronsOf(this.counts[pixel], this.electrons);
    return this.bad[pixel] === 0 && e - e === 0 && e < this.electrons.saturationE;
  }

  paintBackground(blocks: Float64Array, { columns, rows }: { columns: number; rows: number }): void {
    this.painter.paint(blocks, columns, rows, 0, this.at.background);
  }

  setFrame(counts: Float32Array, scale: CountScale): void {
    this.electrons = electronScale(scale);
    this.counts.set(counts);
  }

  lightLevel(readVariance: number): LightLevel {
    return this.lightOf(this.electrons, readVariance);
  }

  respond(light: LightLevel, readVariance: number, peakLevel = Infinity): void {
    const { simd, at, electrons } = this;
    this.light = light;
    this.foundLevel = peakLevel < Infinity ? peakLevel : Number.NaN;
    this.peaks.count = simd.respond(
      at.facts,
      at.counts,
      at.bad,
      at.background,
      at.response,
      this.width,
      this.height,
      at.noise,
      at.band,
      at.bandRows,
      at.paddedWidth,
      at.weights,
      this.kernel.reach,
      at.correctionX,
      at.correctionY,
      electrons.offset,
      electrons.perCount,
      electrons.saturationE,
      light.scale,
      light.shift,
      readVariance + DARK_VARIANCE_E2,
      peakLevel,
      at.peaks,
    );
  }

  findPeaks(level: number): Peaks {
    const { simd, at, peaks } = this;
    if (level === this.foundLevel) return peaks;
    this.foundLevel = Number.NaN;
    peaks.count = simd.findPeaks(at.response, this.width, this.height, level, at.peaks);
    return peaks;
  }
}
