import { setTimeout as pause } from 'node:timers/promises';
import { newId } from '@/lib/ids';
import type { CorrectionList, CorrectionsStored } from '@/lib/views/correction-view';
import type { TrackWindowView } from '@/lib/views/analysis-view';
import type { Random } from '@/tracking/random';
import { pick, type Client, type Load } from './load';
import { ownAnalysis, untilIs, type OwnAnalysis } from './own-analysis';
import { sha256 } from './patient-client';

/** After so many an analysis is measured again and another one begun. */
const CORRECTIONS_EACH = 12;
const THINK_MS = 150;

/** One correction as it was sent. */
export type Sent = Record<string, unknown> & { kind: string };

/** An analysis with the corrections that the server has acknowledged, oldest first. */
export interface CorrectedAnalysis extends OwnAnalysis {
  acknowledged: { id: string; sent: Sent }[];
  /** SHA-256 of its corrected tables once they were measured anew; null when time was over before. */
  tables: Record<string, string> | null;
}

export const correctedAnalyses: CorrectedAnalysis[] = [];

/** Tables that follow from corrected tracks. */
export const CORRECTED_TABLES = [
  'tracks.csv',
  'velocities.csv',
  'velocity-pdf.csv',
  'estimates.json',
] as const;

/** Corrects tracks one by one, each from the revision it knows, and has them measured again. */
export const corrector: Client = async (load, random) => {
  while (!load.isOver()) {
    const own = await ownAnalysis(load, random);
    if (!own) continue;
    const corrected: CorrectedAnalysis = { ...own, acknowledged: [], tables: null };
    correctedAnalyses.push(corrected);
    while (corrected.acknowledged.length < CORRECTIONS_EACH && !load.isOver()) {
      await correctOnce(load, random, corrected);
      await pause(THINK_MS);
    }
    await measured(load, corrected);
  }
};

async function correctOnce(load: Load, random: Random, corrected: CorrectedAnalysis): Promise<void> {
  const { client, ledger } = load;
  const base = `/api/v1/analyses/${corrected.id}`;
  const window = await client.json<TrackWindowView>(`${base}/tracks?from=0&to=${corrected.stack.frames - 1}`);
  const sent = draw(window, random);
  if (!sent) return;
  const { revision } = await client.json<CorrectionList>(`${base}/corrections?limit=1`);
  const answer = await client.askPatiently(`${base}/corrections`, {
    method: 'POST',
    headers: {
      'content-type': 'application/json',
      'idempotency-key': newId(),
      'if-match': `"${revision}"`,
    },
    body: JSON.stringify(sent),
  });
  const text = answer.body.toString();
  if (answer.status === 201) {
    const stored = JSON.parse(text) as CorrectionsStored;
    corrected.acknowledged.push({ id: stored.items[0].id, sent });
    ledger.count('corrections acknowledged');
  } else if (answer.status === 422) {
    // A track that is too short to be split there, and the like.
    ledger.count('corrections refused');
  } else
    ledger.broken(`a correction of ${corrected.id} was answered ${answer.status}: ${text.slice(0, 300)}`);
}

function draw(window: TrackWindowView, random: Random): Sent | null {
  if (window.tracks.length === 0) return null;
  const i = random.integer(window.tracks.length);
  const [track, first, last] = [window.tracks[i], window.firstFrame![i], window.lastFrame![i]];
  const kind = random.uniform();
  if (kind > 0.85) return drawMark(window, random);
  if (kind < 0.15) return { kind: 'remove', track };
  if (kind < 0.5 && last - first > 6) return { kind: 'split', track, frame: (first + last) >> 1 };
  if (kind < 0.65 && last - first > 8) return { kind: 'trim', track, from: first + 2, to: last - 2 };
  return { kind: 'reclass', track, population: pick(['trapped', 'free', 'undecided'], random) };
}

/** A line between points of two tracks in one frame, or the word that the frame is complete. */
function drawMark({ start, frame, x, y }: TrackWindowView, random: Random): Sent {
  const [one, other] = [start, start].map((of) => of[random.integer(of.length - 1)]);
  if (random.uniform() < 0.4) return { kind: 'complete-frame', frame: frame[one] };
  // Never without a length, whichever points were drawn.
  const end = x[one] === x[other] && y[one] === y[other] ? [0, 0] : [x[other], y[other]];
  return { kind: 'mark-line', frame: frame[one], points: [[x[one], y[one]], end] };
}

/** Waits until nothing is older than the last correction, and keeps what the tables say then. */
export async function measured(load: Load, corrected: CorrectedAnalysis): Promise<void> {
  if (corrected.acknowledged.length === 0) return;
  const path = `/api/v1/analyses/${corrected.id}`;
  const now = await untilIs<{ staleSince: string | null }>(
    load,
    path,
    corrected.id,
    ({ staleSince }) => staleSince === null,
  );
  if (!now) return;
  corrected.tables = await tablesOf(load, corrected.id);
  load.ledger.count('corrected analyses measured again');
}

export async function tablesOf({ client }: Load, id: string): Promise<Record<string, string>> {
  const tables: Record<string, string> = {};
  for (const table of CORRECTED_TABLES) {
    const { status, body } = await client.askPatiently(`/api/v1/analyses/${id}/${table}`);
    tables[table] = `${status} ${sha256(body)}`;
  }
  return tables;
}
