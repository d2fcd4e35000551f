/** The part of an image that a joint fit looks at: what it holds is reused from fit to fit. */
export class FitWindow {
  x0 = 0;
  y0 = 0;
  width = 0;
  height = 0;
  /** Photoelectrons plus read variance, which is Poisson to good approximation. */
  data = new Float64Array(256);
  /** Expected data without the spots that are being fitted. */
  fixed = new Float64Array(256);
  /** 1 where the pixel takes part. */
  used = new Uint8Array(256);

  /**
   * Covers boxes of `reach` pixels around the given centres, as far as the image goes.
   *
   * @param usable 0 where a pixel can't be trusted (bad or saturated), length of the image.
   * @param model expected photoelectrons of everything that isn't being fitted.
   */
  load(
    electrons: Float32Array,
    model: Float32Array,
    usable: Uint8Array,
    imageWidth: number,
    imageHeight: number,
    readVariance: number,
    xs: Float64Array,
    ys: Float64Array,
    count: number,
    reach: number,
  ): void {
    let left = imageWidth;
    let right = -1;
    let top = imageHeight;
    let bottom = -1;
    for (let i = 0; i < count; i++) {
      const x = Math.round(xs[i]);
      const y = Math.round(ys[i]);
      left = Math.min(left, x - reach);
      right = Math.max(right, x + reach);
      top = Math.min(top, y - reach);
      bottom = Math.max(bottom, y + reach);
    }
    this.x0 = Math.max(0, left);
    this.y0 = Math.max(0, top);
    this.width = Math.max(0, Math.min(imageWidth - 1, right) - this.x0 + 1);
    this.height = Math.max(0, Math.min(imageHeight - 1, bottom) - this.y0 + 1);
    const pixels = this.width * this.height;
    if (pixels > this.data.length) {
      this.data = new Float64Array(2 * pixels);
      this.fixed = new Float64Array(2 * pixels);
      this.used = new Uint8Array(2 * pixels);
    }
    this.used.fill(count === 1 ? 1 : 0, 0, pixels);
    if (count > 1) for (let i = 0; i < count; i++) this.markBox(Math.round(xs[i]), Math.round(ys[i]), reach);
    let k = 0;
    for (let y = 0; y < this.height; y++) {
      let at = (this.y0 + y) * imageWidth + this.x0;
      for (let x = 0; x < this.width; x++, at++, k++) {
        this.data[k] = electrons[at] + readVariance;
        this.fixed[k] = model[at] + readVariance;
        if (usable[at] === 0) this.used[k] = 0;
      }
    }
  }

  private markBox(x: number, y: number, reach: number): void {
    const left = Math.max(0, x - reach - this.x0);
    const right = Math.min(this.width - 1, x + reach - this.x0);
    const bottom = Math.min(this.height - 1, y + reach - this.y0);
    for (let row = Math.max(0, y - reach - this.y0); row <= bottom; row++) {
      this.used.fill(1, row * this.width + left, row * this.width + right + 1);
    }
  }
}
