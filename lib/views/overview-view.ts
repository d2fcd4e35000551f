/** What the first page shows; it has no route of its own. */

export interface ArrivingStack {
  recordingId: string;
  name: string;
  bytes: number;
  receivedBytes: number;
  runId: string;
  runName: string;
}

export interface DensityEstimate {
  method: string;
  value: number | null;
  low: number | null;
  high: number | null;
}

export interface ResultRow {
  analysisId: string;
  recordingName: string;
  runId: string;
  runName: string;
  temperature_K: number | null;
  heatFlux_W_m2: number | null;
  finishedAt: string;
  tracks: number;
  trapped: number;
  free: number;
  acceptedCandidates: number;
  /** Line density by each method, m^-2; the combined one among them. */
  lineDensity: DensityEstimate[];
}

export interface OverviewView {
  counts: {
    campaigns: number;
    running: number;
    waiting: number;
    failed: number;
    /** Finished and not signed off. */
    unsigned: number;
    /** Data packages of this person that were built in the last week and can be downloaded. */
    packages: number;
    refused: number;
    /** Rehearsals, which count nowhere else here. */
    rehearsals: number;
    members: number;
  };
  arriving: ArrivingStack[];
  results: ResultRow[];
}
