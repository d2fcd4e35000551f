import { bytesColumn, countsColumn, roundedColumn, type GrowingColumn } from '../growing-column';
import type { PairMotion } from './pair-motion';

const [TELLING, RIGID, RIGID_WHEN_TURNED] = [1, 2, 4];

/**
 * The motions of many pairs in columns: a long recording has millions of pairs, and objects of them would
 * fill the memory. Whoever walks over it gets one short-lived object after the other.
 */
export class PairMotions implements Iterable<PairMotion> {
  private readonly trackA: GrowingColumn<Uint32Array>;
  private readonly trackB: GrowingColumn<Uint32Array>;
  private readonly measured: GrowingColumn<Uint32Array>;
  private readonly common: GrowingColumn<Uint32Array>;
  private readonly dxPx: GrowingColumn<Float32Array>;
  private readonly dyPx: GrowingColumn<Float32Array>;
  private readonly together: GrowingColumn<Float32Array>;
  private readonly asOne: GrowingColumn<Float32Array>;
  private readonly flags: GrowingColumn<Uint8Array>;

  /** @param room how many pairs there are at most. */
  constructor(room: number) {
    this.trackA = countsColumn(room);
    this.trackB = countsColumn(room);
    this.measured = countsColumn(room);
    this.common = countsColumn(room);
    this.dxPx = roundedColumn(room);
    this.dyPx = roundedColumn(room);
    this.together = roundedColumn(room);
    this.asOne = roundedColumn(room);
    this.flags = bytesColumn(room);
  }

  get length(): number {
    return this.trackA.length;
  }

  push(of: PairMotion): void {
    this.trackA.push(of.trackA);
    this.trackB.push(of.trackB);
    this.measured.push(of.measured);
    this.common.push(of.common);
    this.dxPx.push(of.dxPx);
    this.dyPx.push(of.dyPx);
    this.together.push(of.together);
    this.asOne.push(of.asOne);
    this.flags.push(
      (of.telling ? TELLING : 0) | (of.rigid ? RIGID : 0) | (of.rigidWhenTurned ? RIGID_WHEN_TURNED : 0),
    );
  }

  at(i: number): PairMotion {
    const flags = this.flags.values[i];
    return {
      trackA: this.trackA.values[i],
      trackB: this.trackB.values[i],
      measured: this.measured.values[i],
      common: this.common.values[i],
      dxPx: this.dxPx.values[i],
      dyPx: this.dyPx.values[i],
      telling: (flags & TELLING) !== 0,
      rigid: (flags & RIGID) !== 0,
      rigidWhenTurned: (flags & RIGID_WHEN_TURNED) !== 0,
      together: this.together.values[i],
      asOne: this.asOne.values[i],
    };
  }

  *[Symbol.iterator](): Generator<PairMotion> {
    for (let i = 0; i < this.length; i++) yield this.at(i);
  }

  /** Those of the pairs for which a condition holds, to be walked over as often as needed. */
  where(holds: (m: PairMotion) => boolean): Iterable<PairMotion> & { length: number } {
    const rows = countsColumn();
    for (let i = 0; i < this.length; i++) if (holds(this.at(i))) rows.push(i);
    const at = (row: number) => this.at(row);
    return {
      length: rows.length,
      *[Symbol.iterator]() {
        for (let k = 0; k < rows.length; k++) yield at(rows.values[k]);
      },
    };
  }
}
