import type { Correction } from '@/tracking/corrections/correction';

/** A correction that the server has stored. */
export interface StoredCorrection {
  correction: Correction;
  /** Number of the track that it made. */
  made: number | null;
  id: string;
  revision: number;
  gesture: string | null;
  /** Of an undo, what it takes back; null where that is not known. */
  takenBack: Correction | null;
  by: { id: string; name: string } | null;
  at: string;
  inForce: boolean;
}
