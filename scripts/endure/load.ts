import type { Random } from '@/tracking/random';
import type { Ledger } from './ledger';
import type { PatientClient } from './patient-client';
import type { ReferenceStack } from './stacks';

/** A recording that the server has acknowledged whole. */
export interface KnownRecording {
  id: string;
  stack: ReferenceStack;
  /** Analyses asked for by different keys; there must not be more. */
  asked: number;
}

/** An analysis whose end the server has acknowledged. */
export interface KnownAnalysis {
  id: string;
  stack: ReferenceStack;
  state: 'done' | 'stopped';
}

/** What the clients of a trial share. */
export interface Load {
  ledger: Ledger;
  stacks: ReferenceStack[];
  client: PatientClient;
  annotator: PatientClient;
  administrator: PatientClient;
  campaignId: string;
  runId: string;
  recordings: KnownRecording[];
  analyses: KnownAnalysis[];
  /** No client begins anything new once the time is over; what is begun is brought to its end. */
  isOver: () => boolean;
}

/** One client: does one thing after the other until the time is over. */
export type Client = (load: Load, random: Random, number: number) => Promise<void>;

export const pick = <T>(list: readonly T[], random: Random): T => list[random.integer(list.length)];
