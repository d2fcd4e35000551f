import { ClusteredRatios } from './clustered-ratios';

/**
 * Adds up what tracks give by cluster, with the room of one cluster at a time: tracks are taken in the
 * order of their clusters, and these in the order in which they first come.
 *
 * @param clusterOf of a track, by any number; null for a track that is left out.
 * @param addTrack adds what one track gives to `sum` and `count` of its cluster, `columns` of each.
 */
export function sumClusters(
  columns: number,
  tracks: number,
  clusterOf: (track: number) => number | null,
  addTrack: (track: number, sum: Float64Array, count: Float64Array) => void,
): ClusteredRatios {
  const sums = new ClusteredRatios(columns);
  const sum = new Float64Array(columns);
  const count = new Float64Array(columns);
  const { from, order } = inClusters(tracks, clusterOf);
  for (let cluster = 0; cluster + 1 < from.length; cluster++) {
    sum.fill(0);
    count.fill(0);
    for (let k = from[cluster]; k < from[cluster + 1]; k++) addTrack(order[k], sum, count);
    sums.add(sum, count);
  }
  return sums;
}

/** Tracks sorted by cluster: those of cluster c are `order[from[c] .. from[c + 1] - 1]`. */
function inClusters(tracks: number, clusterOf: (track: number) => number | null) {
  const names = new Map<number, number>();
  const cluster = new Int32Array(tracks).fill(-1);
  for (let i = 0; i < tracks; i++) {
    const key = clusterOf(i);
    if (key === null) continue;
    let name = names.get(key);
    if (name === undefined) names.set(key, (name = names.size));
    cluster[i] = name;
  }
  const from = new Uint32Array(names.size + 1);
  for (const of of cluster) if (of >= 0) from[of + 1]++;
  for (let c = 0; c < names.size; c++) from[c + 1] += from[c];
  const order = new Uint32Array(from[names.size]);
  const place = from.slice();
  cluster.forEach((of, i) => {
    if (of >= 0) order[place[of]++] = i;
  });
  return { from, order };
}
