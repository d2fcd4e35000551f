/** One step from frames to numbers, in words, with the source of its method. */
export interface MethodWords {
  step: string;
  words: string;
  source: string;
}

/** What was done to every recording of a report, in the order in which it was done. */
export const METHODS_IN_WORDS: readonly MethodWords[] = [
  {
    step: 'Image',
    words:
      'Gain and read noise follow from the variance of differences of neighbouring frames against their mean; background and spot size from the frames themselves.',
    source: 'photon transfer, common practice',
  },
  {
    step: 'Positions',
    words:
      'Spots are found by a matched filter in units of the local noise, at a threshold set by the false spots per frame that the recipe allows. Positions are maximum-likelihood fits of pixel-integrated Gaussians, touching spots together; standard errors from the Fisher information.',
    source: 'Mortensen et al., Nat. Methods 7, 377 (2010); Ober, Ram & Ward, Biophys. J. 86, 1185 (2004)',
  },
  {
    step: 'Tracks',
    words:
      'Positions of neighbouring frames are linked by exact assignment with costs from a motion model that is learned from the recording; frames in which a tracer was missed are bridged and marked.',
    source:
      'Jonker & Volgenant, Computing 38, 325 (1987); Blom & Bar-Shalom, IEEE Trans. Autom. Control 33, 780 (1988)',
  },
  {
    step: 'Helium',
    words:
      'Densities, entropy and viscosity at saturated vapour pressure, interpolated in a table; counterflow velocities from the heat flux by the two-fluid model without net mass flux.',
    source: 'Donnelly & Barenghi, J. Phys. Chem. Ref. Data 27, 1217 (1998)',
  },
  {
    step: 'Populations',
    words:
      'Tracks are trapped, free or undecided with a probability, by a Gaussian mixture over features of the tracks with their errors, averaged over what the mixture may be; a track is cut where its tracer was caught or came off.',
    source:
      'expectation-maximization, number of groups by Schwarz, Ann. Stat. 6, 461 (1978); Breiman, Machine Learning 24, 123 (1996)',
  },
  {
    step: 'Velocity distributions',
    words:
      'Displacements over a lag; bands from resampling whole tracks; beside the histogram Gaussian kernels whose width grows where samples are rare. Distributions of several runs are pooled run by run, each counted once, with the variance between runs beside the mean.',
    source:
      'bootstrap of clusters; Silverman, Density Estimation (1986); Abramson, Ann. Stat. 10, 1217 (1982); DerSimonian & Laird, Controlled Clinical Trials 7, 177 (1986)',
  },
  {
    step: 'Line density',
    words:
      'Several estimates with their own assumptions stand side by side; they are combined by a random-effects mean, and not where they disagree.',
    source: 'DerSimonian & Laird (1986)',
  },
  {
    step: 'Steady tangle',
    words:
      'L^(1/2) = γ (v_ns − v_0) is fitted with errors in both quantities; the interval of v_0 is that of a ratio.',
    source:
      'Vinen, Proc. R. Soc. A 242, 493 (1957); York et al., Am. J. Phys. 72, 367 (2004); Fieller, J. R. Stat. Soc. B 16, 175 (1954)',
  },
  {
    step: 'Reconnections',
    words:
      'Pairs of tracks that meet and part are tested against independent tracks at a false discovery rate, and judged by people who do not see each other’s verdicts; events per volume and time are those that were confirmed, with the interval of a Poisson count.',
    source:
      'Benjamini & Hochberg, J. R. Stat. Soc. B 57, 289 (1995); Cohen, Educ. Psychol. Meas. 20, 37 (1960); Garwood, Biometrika 28, 437 (1936)',
  },
];
