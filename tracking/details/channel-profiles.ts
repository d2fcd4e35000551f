import type { EstimateContext } from '../estimates/context';
import { Z95 } from '../normal-tail';
import { FREE, TRAPPED } from '../populations/codes';
import { sumClusters } from '../resampling/sum-clusters';
import { trackSlice } from '../track-slice';
import { POINT_BRIDGED, type Conditions, type Tracks } from '../types';
import { alongAcross, trackVelocities, unitFlow } from '../velocities';
import { seriesOf, UNKNOWN, type Series, type SeriesPoint } from './series';

/** Mean quantities in strips along the flow, by their place across it. Plain JSON. */
export interface ChannelProfiles {
  /** Middle of every strip: distance from the first wall where walls are given, else from the middle of the image, m. */
  placeM: number[];
  fromWall: boolean;
  /** Distance between the walls, m; null where they are not given. */
  widthM: number | null;
  /** Mean velocity along the flow, m/s. */
  freeAlongMS: Series;
  trappedAlongMS: Series;
  /** Measured spots of tracks per frame and area, m^-2. */
  spotsPerAreaM2: Series;
  /** Line density, m^-2; null where tracers per length of line are unknown. */
  densityM2: Series | null;
  note: string;
}

const STRIPS = 12;
/** The area of strips is counted on so many places along each side of the image. */
const GRID = 240;

/**
 * Profiles across the channel. Velocities belong to the strip of their middle; errors are those of
 * independent tracks, and of independent lines for trapped ones.
 *
 * @returns null where the direction of the flow is not given.
 */
export function channelProfiles(
  tracks: Tracks,
  population: Uint8Array,
  line: Int32Array,
  image: { width: number; height: number; frames: number },
  conditions: Conditions,
  lagFrames: number,
  context: EstimateContext | null,
): ChannelProfiles | null {
  const flow = unitFlow(conditions);
  if (!flow) return null;
  const px = conditions.pixelSize_m;
  const across = (x: number, y: number) => alongAcross(x, y, flow)[1];
  const axis = stripsOf(image, across, wallsAcross(conditions, across));
  const stripOf = (x: number, y: number) => Math.floor((across(x, y) - axis.lowPx) / axis.stripPx);
  const areaM2 = areas(image, stripOf, px);

  const velocities = (code: number, clusterOf: (track: number) => number) => {
    const own = (i: number) => (population[i] === code ? clusterOf(i) : null);
    const ratios = sumClusters(STRIPS, tracks.count, own, (i, sum, count) => {
      const slice = trackSlice(tracks, i);
      const v = trackVelocities(slice, lagFrames, conditions);
      for (let k = 0; k < v.frame.length; k++) {
        const at = v.frame[k] - slice.frame[0];
        const to = at + lagFrames;
        const strip = stripOf((slice.xPx[at] + slice.xPx[to]) / 2, (slice.yPx[at] + slice.yPx[to]) / 2);
        if (strip < 0 || strip >= STRIPS) continue;
        sum[strip] += alongAcross(v.vxMS[k], v.vyMS[k], flow)[0];
        count[strip]++;
      }
    });
    return seriesOf(
      Array.from({ length: STRIPS }, (_, c): SeriesPoint => {
        const { value, low, high } = ratios.ratio(c);
        return Number.isFinite(value) && low !== null ? { value, low, high } : UNKNOWN;
      }),
    );
  };
  const perArea = (clusterOf: (track: number) => number | null) => {
    const sums = sumClusters(STRIPS, tracks.count, clusterOf, (i, _, count) => {
      for (let p = tracks.start[i]; p < tracks.start[i + 1]; p++) {
        if (tracks.flags[p] & POINT_BRIDGED) continue;
        const strip = stripOf(tracks.xPx[p], tracks.yPx[p]);
        if (strip >= 0 && strip < STRIPS) count[strip]++;
      }
    });
    return Array.from({ length: STRIPS }, (_, c): SeriesPoint => {
      const { value, relativeError } = sums.total(c);
      if (!(areaM2[c] > 0) || !(value > 0)) return UNKNOWN;
      const scaled = value / image.frames / areaM2[c];
      const spread = Math.exp(Z95 * relativeError);
      return { value: scaled, low: scaled / spread, high: scaled * spread };
    });
  };

  const lineOf = (track: number) => line[track];
  const own = (track: number) => track;
  const scale = densityScale(context);
  const trapped = perArea((i) => (population[i] === TRAPPED ? line[i] : null));
  return {
    placeM: Array.from(
      { length: STRIPS },
      (_, c) => ((c + 0.5) * axis.stripPx + axis.lowPx - axis.zeroPx) * px,
    ),
    fromWall: axis.widthPx !== null,
    widthM: axis.widthPx === null ? null : axis.widthPx * px,
    freeAlongMS: velocities(FREE, own),
    trappedAlongMS: velocities(TRAPPED, lineOf),
    spotsPerAreaM2: seriesOf(perArea((i) => (line[i] >= 0 ? -1 - line[i] : i))),
    densityM2:
      scale === null
        ? null
        : seriesOf(
            trapped.map(({ value, low, high }) => ({
              value: value === null ? null : value * scale,
              low: low === null ? null : low * scale,
              high: high === null ? null : high * scale,
            })),
          ),
    note:
      scale === null
        ? 'Tracers per length of line are unknown, so there is no line density across the channel.'
        : 'Line density from trapped tracers over tracers per length of line, which is taken from the whole recording and shifts the whole curve.',
  };
}

function densityScale(context: EstimateContext | null): number | null {
  const h = context?.conditions.sheetThickness_m;
  return context?.fellows && h ? 1 / (context.fellows.tracersPerLengthM * h) : null;
}

/** Places across the flow of walls that run along it, px; null unless there are two. */
function wallsAcross(conditions: Conditions, across: (x: number, y: number) => number) {
  const places = (conditions.wallsPx ?? []).map(([x0, y0, x1, y1]) => (across(x0, y0) + across(x1, y1)) / 2);
  const [low, high] = [Math.min(...places), Math.max(...places)];
  return places.length >= 2 && high - low > STRIPS ? { low, high } : null;
}

function stripsOf(
  image: { width: number; height: number },
  across: (x: number, y: number) => number,
  walls: { low: number; high: number } | null,
) {
  const corners = [-0.5, image.width - 0.5].flatMap((x) =>
    [-0.5, image.height - 0.5].map((y) => across(x, y)),
  );
  let [low, high] = [Math.min(...corners), Math.max(...corners)];
  const middle = (low + high) / 2;
  if (walls) {
    low = Math.max(low, walls.low);
    high = Math.min(high, walls.high);
  }
  return {
    lowPx: low,
    stripPx: (high - low) / STRIPS,
    zeroPx: walls ? walls.low : middle,
    widthPx: walls ? walls.high - walls.low : null,
  };
}

/** Area of every strip inside the image, m^2, counted on a grid. */
function areas(
  image: { width: number; height: number },
  stripOf: (x: number, y: number) => number,
  pixelM: number,
): Float64Array {
  const out = new Float64Array(STRIPS);
  const each = (image.width * image.height * pixelM * pixelM) / (GRID * GRID);
  for (let a = 0; a < GRID; a++) {
    for (let b = 0; b < GRID; b++) {
      const strip = stripOf(((a + 0.5) * image.width) / GRID - 0.5, ((b + 0.5) * image.height) / GRID - 0.5);
      if (strip >= 0 && strip < STRIPS) out[strip] += each;
    }
  }
  return out;
}
