/** What the order of a queue needs of a candidate. */
export interface Ranked {
  event: number;
  qValue: number | null;
  /** Criteria that it fails. */
  failed: number;
}

/** The rule in one sentence, for the page. */
export const REVIEW_ORDER_WORDS =
  'First what fails at most one criterion, nearest first to the false discovery rate at which it would be accepted: there a person’s eye decides. Then the rest in the same way.';

/**
 * Compares two candidates of a queue by what a judgement is worth: the machine is least sure where the q value is near
 * the accepted rate, by ratio, and sure of little that fails several criteria. Never by what readers have said.
 * @param rate false discovery rate of the recipe, 0..1
 */
export function reviewOrder(rate: number): (a: Ranked, b: Ranked) => number {
  const group = ({ failed }: Ranked) => (failed <= 1 ? 0 : 1);
  const distance = ({ qValue }: Ranked) =>
    qValue !== null && qValue > 0 && rate > 0 ? Math.abs(Math.log(qValue / rate)) : Infinity;
  return (a, b) => {
    const [near, far] = [distance(a), distance(b)];
    return group(a) - group(b) || (near === far ? 0 : near - far) || a.event - b.event;
  };
}
