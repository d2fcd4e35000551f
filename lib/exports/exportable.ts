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
  /** Of what no camera took. */
  rehearsal: boolean;
}
