import type { Advice } from '../assessment';
import { crowdedDistancePx } from '../assess-detection';
import type { AdviceFacts } from './facts';
import { about, micrometres, percent } from './words';

/** Missed points beyond this share are worth a change. */
const MISSED_MOST = 0.05;
/** Share of tracers whose image may touch another one. */
const CROWDED_WANTED = 0.1;
/** Estimates of the line density need at least so many trapped tracers to have a narrow interval (common practice, no source). */
const TRAPPED_LEAST = 40;

type Facts = Pick<
  AdviceFacts,
  'assessed' | 'spotSizePx' | 'tracersInSight' | 'widthPx' | 'heightPx' | 'trappedTracers' | 'made'
>;

/**
 * Whether images touch so often that tracers are lost. Of points laid at random, density n, a share
 * 1 - exp(-n pi r^2) has another one within r (Poisson process).
 */
export function crowdingAdvice(facts: Facts): Advice[] {
  const { assessed, spotSizePx, tracersInSight, widthPx, heightPx } = facts;
  const { found, truePoints, missedCrowded } = assessed.detection;
  const missed = (1 - found.value) * truePoints;
  if (assessed.kind === 'planted' || !(1 - found.value > MISSED_MOST) || missedCrowded < 0.5 * missed) return []; // prettier-ignore
  const reachPx = crowdedDistancePx(spotSizePx);
  const wanted = -Math.log(1 - CROWDED_WANTED) / (Math.PI * reachPx * reachPx);
  const factor = tracersInSight / (widthPx * heightPx) / wanted;
  const so = factor > 1 ? `: seed ${about(factor)} times more thinly` : '';
  return [
    {
      about: 'seeding',
      weight: 'change',
      sentence: `${percent(1 - found.value)} of the tracer images are missed, ${percent(missedCrowded / missed)} of them within ${about(reachPx)} px of another tracer${so}.`,
    },
  ];
}

/** Whether there are enough tracers on lines to say anything of the lines. */
export function thinSeedingAdvice({ trappedTracers, assessed }: Facts): Advice[] {
  if (assessed.kind === 'planted' || trappedTracers === 0 || trappedTracers >= TRAPPED_LEAST) return [];
  return [
    {
      about: 'seeding',
      weight: 'change',
      sentence: `Only ${trappedTracers} trapped tracers pass in the whole recording: seed more densely or record longer, since every estimate of the line density rests on them.`,
    },
  ];
}

/** Many tracers on a line change the tangle that they are to show (common practice, no source). */
export function loadedLinesAdvice({ made }: Facts): Advice[] {
  const { beadsPerMetre, spacingM } = made;
  if (beadsPerMetre === null || spacingM === null || 1 / beadsPerMetre > spacingM) return [];
  return [
    {
      about: 'seeding',
      weight: 'know',
      sentence: `Trapped tracers sit ${micrometres(1 / beadsPerMetre)} apart on a line, closer than the lines themselves (${micrometres(spacingM)}): so many may change the tangle, which this simulation does not show.`,
    },
  ];
}
