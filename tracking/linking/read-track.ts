import type { SpotTable } from './spot-table';
import type { TracerFilter } from './tracer-filter';

/** Spots of a track that are read to know its motion and brightness. */
const SPOTS_READ = 12;
const reading = new Int32Array(SPOTS_READ);

/**
 * Brings a slot of a filter to what the spots up to `s` tell: those before it in its track, or
 * with `links` the followers and a filter that reads backwards, those after it.
 *
 * @param links for each spot the next one to read, or -1.
 */
export function readTrack(
  filter: TracerFilter,
  slot: number,
  table: SpotTable,
  links: Int32Array,
  s: number,
): void {
  let count = 0;
  for (let k = s; k >= 0 && count < SPOTS_READ; k = links[k]) reading[count++] = k;
  filter.start(slot, reading[count - 1]);
  for (let k = count - 2; k >= 0; k--) {
    const gap = Math.abs(table.frame[reading[k]] - table.frame[reading[k + 1]]);
    for (let g = 0; g < gap; g++) filter.predict(slot);
    filter.update(slot, reading[k]);
  }
}
