/** One law of free decay, fitted. Plain JSON. */
export interface DecayLaw {
  law: 'random tangle, 1/t' | 'large eddies, t^-3/2';
  /** Time after which the density has halved at the start of the recording, s; null where it doesn't fall. */
  halvingS: number | null;
  /** Time before the recording at which the law begins, s. */
  beginsBeforeS: number | null;
  deltaBic: number;
}

/** Differences below 6 of the information criterion don't decide. */
const DECISIVE_BIC = 6;
const LAWS = [
  // Vinen 1957: 1/L grows linearly in time.
  { law: 'random tangle, 1/t', exponent: 1 },
  // Skrbek & Stalp, Phys. Fluids 12, 1997 (2000): L falls as t^(-3/2) once the largest eddies fill the channel.
  { law: 'large eddies, t^-3/2', exponent: 1.5 },
] as const;

/**
 * Both laws of decay are n = a (t + t0)^(-m), so n^(-1/m) is a straight line in time; fitted by weighted
 * least squares and compared by the Bayesian information criterion of ln n.
 */
export function fitDecayLaws(series: {
  timeS: readonly number[];
  densityM2: readonly number[];
  lnError: readonly number[];
}): { laws: DecayLaw[]; note: string } {
  const fits = LAWS.map(({ law, exponent }) => ({ law, exponent, ...fitPower(series, exponent) }));
  const n = series.timeS.length;
  const bic = fits.map(({ squares }) => n * Math.log(Math.max(squares, Number.MIN_VALUE) / n));
  const least = Math.min(...bic);
  const laws = fits.map(({ law, exponent, intercept, slope }, k) => {
    const begins = slope > 0 ? intercept / slope : null;
    return {
      law,
      halvingS: begins === null ? null : begins * (2 ** (1 / exponent) - 1),
      beginsBeforeS: begins,
      deltaBic: bic[k] - least,
    };
  });
  const apart = Math.max(...laws.map((one) => one.deltaBic));
  const best = laws.find((one) => one.deltaBic === 0);
  const note =
    apart < DECISIVE_BIC
      ? `Trapped tracers become fewer; the data cannot tell the laws of decay apart: they differ by ${apart.toFixed(1)} in the information criterion, and less than ${DECISIVE_BIC} doesn’t decide.`
      : `Trapped tracers become fewer as the law ${best?.law ?? ''} has it, better than the other by ${apart.toFixed(0)} in the information criterion.`;
  return { laws, note };
}

function fitPower(
  {
    timeS,
    densityM2,
    lnError,
  }: { timeS: readonly number[]; densityM2: readonly number[]; lnError: readonly number[] },
  exponent: number,
) {
  const y = densityM2.map((n) => n ** (-1 / exponent));
  // The error of n^(-1/m) is that over m times the error of ln n.
  const weight = y.map((value, i) => (exponent / (value * lnError[i])) ** 2);
  const total = weight.reduce((a, b) => a + b, 0);
  const mt = timeS.reduce((sum, t, i) => sum + weight[i] * (t - timeS[0]), 0) / total;
  const my = y.reduce((sum, v, i) => sum + weight[i] * v, 0) / total;
  let tt = 0;
  let ty = 0;
  timeS.forEach((t, i) => {
    tt += weight[i] * (t - timeS[0] - mt) ** 2;
    ty += weight[i] * (t - timeS[0] - mt) * (y[i] - my);
  });
  const slope = ty / tt;
  const intercept = my - slope * mt;
  let squares = 0;
  timeS.forEach((t, i) => {
    const model = Math.max(1e-12 * intercept, intercept + slope * (t - timeS[0]));
    squares += ((Math.log(densityM2[i]) + exponent * Math.log(model)) / lnError[i]) ** 2;
  });
  return { intercept, slope, squares };
}
