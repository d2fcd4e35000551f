import type { SpotFits } from './spot-fits';
import type { SpotSizes } from './spot-sizes';
import type { SpotTable } from './spot-table';

/** A size must gain so much log-likelihood, more than compiled fits are uncertain by. */
const GAIN_LEAST = 1e-2;

/** First in larger steps, wider and narrower, then in single ones. */
const STRIDES = [2, -2, 1, -1];

type OfGroup = (table: SpotTable, members: Int32Array, count: number) => void;

/**
 * Chooses, after a fit, the size of each member that makes the group's light most likely together with how
 * rare the size is; the members are fitted again with the sizes chosen. Place and size hang together hardly at
 * all, so standard errors of places stay those of known sizes.
 *
 * @param start puts the members' values into the fits @param store takes them out again
 */
export function createSizeChoice(
  joint: SpotFits,
  { sigmaPx, cost }: SpotSizes,
  start: OfGroup,
  store: OfGroup,
): (table: SpotTable, members: Int32Array, count: number, offsetSpreadE: number) => void {
  if (sigmaPx.length === 1) return () => undefined;

  return (table, members, count, offsetSpreadE) => {
    let likelihood = joint.logLikelihood();
    for (let k = 0; k < count; k++) {
      const i = members[k];
      for (const stride of STRIDES) {
        const before = table.size[i];
        for (let next = before + stride; next >= 0 && next < sigmaPx.length; next += stride) {
          start(table, members, count);
          joint.sigma[k] = sigmaPx[next];
          joint.run(count, offsetSpreadE);
          const changed = joint.logLikelihood();
          if (!(changed - likelihood > cost[next] - cost[table.size[i]] + GAIN_LEAST)) break;
          likelihood = changed;
          table.size[i] = next;
          store(table, members, count);
        }
        if (Math.abs(stride) === 1 && table.size[i] !== before) break;
      }
    }
    start(table, members, count);
    joint.run(count, offsetSpreadE);
    store(table, members, count);
  };
}
