/** A finished analysis as it is offered for a package. */
export interface ExportableAnalysis {
  id: string;
  campaignId: string;
  campaign: string;
  run: string;
  recording: string;
  temperatureK: number | null;
  heatFluxWM2: number | null;
  tracks: number;
  points: number;
  finishedAt: string | null;
  signedOff: boolean;
}

/** What a choice is narrowed by; empty for everything. */
export interface OfferFilter {
  campaignId: string;
  signedOff: '' | 'yes' | 'no';
  /** Kelvin, as typed; null for no bound. */
  temperatureFrom: number | null;
  temperatureTo: number | null;
}

export const NO_FILTER: OfferFilter = { campaignId: '', signedOff: '', temperatureFrom: null, temperatureTo: null }; // prettier-ignore

/** Analyses that a filter lets through; one whose temperature is not known is outside every bound. */
export function offered(all: readonly ExportableAnalysis[], filter: OfferFilter): ExportableAnalysis[] {
  const { campaignId, signedOff, temperatureFrom: from, temperatureTo: to } = filter;
  return all.filter(
    (one) =>
      (campaignId === '' || one.campaignId === campaignId) &&
      (signedOff === '' || one.signedOff === (signedOff === 'yes')) &&
      (from === null || (one.temperatureK !== null && one.temperatureK >= from)) &&
      (to === null || (one.temperatureK !== null && one.temperatureK <= to)),
  );
}
