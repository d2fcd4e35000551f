import type { Transaction } from 'sequelize';
import { models } from '@/models';
import type { Correctable } from '@/models/queries/correctable';
import type { LogRow } from '@/models/queries/correction-log';
import { execute } from '@/models/queries/select';
import { writeAudit } from '@/models/queries/write-audit';
import {
  lastPopulations,
  replaceTracks,
  type EditedRow,
  type PopulationOf,
} from '@/models/queries/write-edited-tracks';
import type { LoggedCorrection } from '@/tracking/corrections/correction';
import { NOT_GIVEN, type EditedTrack } from '@/tracking/corrections/edited-track';
import { packTracks } from '@/tracking/corrections/pieces';
import { trackMeans } from '@/tracking/track-means';
import { askToRemeasure } from '../remeasure-tracks';
import type { NextState } from './next-state';

const UNDECIDED: PopulationOf = { population: 2, pTrapped: null };

export interface StoreRequest {
  analysis: Correctable;
  userId: string;
  corrections: readonly LoggedCorrection[];
  next: NextState;
  requestKey: string | null;
  /** What the audit trail calls it. */
  action?: string;
  detail?: Record<string, unknown>;
}

/** Stores corrections and the tracks as they leave them, in the transaction that holds the analysis's row. */
export async function storeCorrections(
  { analysis, userId, corrections, next, requestKey, action, detail }: StoreRequest,
  transaction: Transaction,
): Promise<LogRow[]> {
  const { id: analysisId, labId } = analysis;
  const revision = analysis.revision + corrections.length;
  const rows = await models().CorrectionRow.bulkCreate(
    corrections.map(({ id, kind, gesture, ...fields }, place) => ({
      id,
      labId,
      analysisId,
      seq: analysis.revision + place + 1,
      kind,
      fields,
      gesture: gesture ?? null,
      madeTrack: next.made[place],
      requestKey,
      createdBy: userId,
    })),
    { transaction },
  );
  await replaceTracks(
    analysisId,
    revision,
    { ended: [...next.changed.keys()], rows: await editedRows(analysis, corrections, next, transaction) },
    transaction,
  );
  await execute(
    `UPDATE analyses SET tracks_revision = $2, stale_since = coalesce(stale_since, now()),
       revision = revision + 1, updated_at = now() WHERE id = $1`,
    [analysisId, revision],
    transaction,
  );
  await askToRemeasure({ labId, analysisId, revision }, transaction);
  const kinds = Object.fromEntries(
    [...new Set(corrections.map(({ kind }) => kind))].map((kind) => [
      kind,
      corrections.filter((one) => one.kind === kind).length,
    ]),
  );
  await writeAudit(
    {
      labId,
      userId,
      action: action ?? 'analysis.corrected',
      subjectKind: 'analysis',
      subjectId: analysisId,
      detail: { fromRevision: analysis.revision, revision, kinds, ...detail },
    },
    transaction,
  );
  return rows.map((row) => row.get({ plain: true }) as LogRow);
}

/** Rows of the tracks that are there afterwards. Populations are those told last until they are measured again. */
async function editedRows(
  analysis: Correctable,
  corrections: readonly LoggedCorrection[],
  { changed, asLinked, made }: NextState,
  transaction: Transaction,
): Promise<EditedRow[]> {
  const alive = [...changed.values()].filter((track) => track !== null);
  const parents = new Map<number, number>();
  corrections.forEach((correction, place) => {
    const number = made[place];
    if (number !== null && correction.kind === 'split') parents.set(number, correction.track);
  });
  const told = await lastPopulations(
    analysis.id,
    [...alive.map(({ track }) => track), ...parents.values()],
    transaction,
  );
  const populationOf = (number: number): PopulationOf => {
    const known = told.get(number);
    if (known) return (asLinked.has(number) ? known.raw : known.last) ?? UNDECIDED;
    const parent = parents.get(number);
    return parent === undefined || parent >= number ? UNDECIDED : populationOf(parent);
  };
  const speeds = trackMeans(packTracks(alive).tracks, analysis.conditions, analysis.recipe.lagsFrames[0]);
  return alive.map((track, i) => ({
    track,
    ...(wholeGiven(track) ?? populationOf(track.track)),
    meanSpeedMS: Number.isNaN(speeds.meanSpeedMS[i]) ? null : speeds.meanSpeedMS[i],
    changed: !asLinked.has(track.track),
  }));
}

/** A population that a person gave to the whole of a track. */
function wholeGiven({ given }: EditedTrack): PopulationOf | null {
  const [code] = given;
  if (code === NOT_GIVEN || given.some((one) => one !== code)) return null;
  return { population: code, pTrapped: null };
}
