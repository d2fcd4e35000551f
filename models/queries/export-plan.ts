import type { CorrectionStep, JudgementStep, PlannedAnalysis } from '@/lib/exports/plan';
import { readReconnections } from './analysis-outcome';
import { measuresOf } from './read-results';
import { REHEARSAL_MARK } from './rehearsal-mark';
import { selectRows } from './select';

interface Row extends Omit<
  PlannedAnalysis,
  | 'folder'
  | 'measures'
  | 'candidates'
  | 'verdicts'
  | 'judgements'
  | 'corrections'
  | 'strips'
  | 'campaign'
  | 'run'
  | 'recording'
  | 'signedOff'
  | 'startedAt'
  | 'finishedAt'
> {
  campaign: PlannedAnalysis['campaign'];
  run: { id: string; name: string };
  runStartedAt: Date | null;
  recording: PlannedAnalysis['recording'];
  startedAt: Date | null;
  finishedAt: Date | null;
  signedOffAt: Date | null;
  signedOffBy: string | null;
  contentHash: string | null;
}

/**
 * What a package says of its analyses, in the order in which they were made.
 * @throws LabError NOT_FOUND, NOT_COMPUTED
 */
export async function planAnalyses(labId: string, ids: readonly string[]): Promise<PlannedAnalysis[]> {
  const rows = await selectRows<Row>(
    `SELECT a.id, a.tracks_revision AS "tracksRevision", a.conditions, a.recipe, a.image_facts AS "imageFacts",
       a.summary, a.code_version AS "codeVersion", a.started_at AS "startedAt", a.finished_at AS "finishedAt",
       json_build_object('id', k.id, 'name', k.name) AS campaign,
       json_build_object('id', r.id, 'name', r.name) AS run, r.started_at AS "runStartedAt",
       json_build_object('id', g.id, 'name', g.name, 'sha256', g.sha256, 'bytes', g.bytes, 'frames', a.frames,
         'width', g.width, 'height', g.height) AS recording,
       (SELECT p.name || ' ' || p.version FROM recipes p WHERE p.id = a.recipe_id) AS "recipeName",
       ${REHEARSAL_MARK} AS rehearsal, u.name AS "createdBy", a.signed_off_at AS "signedOffAt", a.content_hash AS "contentHash",
       (SELECT s.name FROM users s WHERE s.id = a.signed_off_by) AS "signedOffBy"
     FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
       JOIN campaigns k ON k.id = r.campaign_id LEFT JOIN users u ON u.id = a.created_by
     WHERE a.lab_id = $1 AND a.id = ANY($2::uuid[]) ORDER BY a.id`,
    [labId, [...ids]],
  );
  const planned: PlannedAnalysis[] = [];
  for (const [i, row] of rows.entries()) {
    const { runStartedAt, signedOffAt, signedOffBy, contentHash, ...kept } = row;
    const { populations, pdfs, estimates, motion, details } = await measuresOf(
      labId,
      row.id,
      row.tracksRevision,
    );
    const candidates = await readReconnections(labId, row.id);
    planned.push({
      ...kept,
      folder: `analysis-${String(i + 1).padStart(3, '0')}`,
      run: { ...row.run, startedAt: runStartedAt?.toISOString() ?? null },
      startedAt: row.startedAt?.toISOString() ?? null,
      finishedAt: row.finishedAt?.toISOString() ?? null,
      signedOff: signedOffAt && {
        at: signedOffAt.toISOString(),
        by: signedOffBy,
        contentHash: contentHash ?? '',
      },
      measures: { populations, pdfs, estimates, motion, details },
      candidates: candidates.rows,
      // By number of the event, which need not be its place in the list.
      verdicts: Array.from(
        { length: Math.max(-1, ...candidates.verdicts.keys()) + 1 },
        (_, event) => candidates.verdicts.get(event) ?? '',
      ),
      judgements: await judgementsOf(labId, row.id),
      corrections: await correctionsOf(labId, row.id),
    });
  }
  return planned;
}

async function judgementsOf(labId: string, analysisId: string): Promise<JudgementStep[]> {
  const rows = await selectRows<Omit<JudgementStep, 'at'> & { at: Date }>(
    `SELECT c.event, s.kind, s.step, s.verdict, s.reason, s.note, u.name AS by, s.created_at AS at FROM (
       SELECT candidate_id, 'reading' AS kind, step, verdict, reason, note, reader_id AS person, created_at
         FROM verdicts WHERE lab_id = $1 AND analysis_id = $2
       UNION ALL
       SELECT candidate_id, 'settlement', step, verdict, reason, NULL, settled_by, created_at
         FROM settlements WHERE lab_id = $1 AND analysis_id = $2) s
     JOIN candidates c ON c.id = s.candidate_id JOIN users u ON u.id = s.person
     ORDER BY c.event, s.kind, s.created_at, s.person, s.step`,
    [labId, analysisId],
  );
  return rows.map((row) => ({ ...row, at: row.at.toISOString() }));
}

async function correctionsOf(labId: string, analysisId: string): Promise<CorrectionStep[]> {
  const rows = await selectRows<Omit<CorrectionStep, 'at'> & { at: Date }>(
    `SELECT c.seq AS revision, c.kind, c.fields AS detail, u.name AS by, c.created_at AS at
     FROM corrections c JOIN users u ON u.id = c.created_by
     WHERE c.lab_id = $1 AND c.analysis_id = $2 ORDER BY c.seq`,
    [labId, analysisId],
  );
  return rows.map((row) => ({ ...row, at: row.at.toISOString() }));
}
