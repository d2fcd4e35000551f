import type { CandidateFacts } from '@/lib/analysis-facts';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { execute } from '@/models/queries/select';
import type { LabRows } from './lab-rows';

const side = { points: 8, amplitude: 1.1, amplitudeError: 0.1, exponent: 0.5, exponentError: 0.05 };

/** Facts of a meeting half a second into a recording of 5 ms a frame. */
export function candidateFacts(fields: Partial<CandidateFacts> = {}): CandidateFacts {
  const frame = Array.from({ length: 9 }, (_, i) => 16 + i);
  const separationM = frame.map((f) => 4e-6 + 3e-5 * Math.sqrt(Math.abs(f - 20) * 0.005));
  return {
    trackA: 0,
    trackB: 1,
    t0S: 0.1,
    t0ErrorS: 0.001,
    xPx: 30,
    yPx: 32,
    minSeparationM: 4e-6,
    offsetM: 2e-6,
    before: side,
    after: side,
    reducedChi2: 1,
    bicGain: 31,
    pChance: 0.003,
    qValue: 0.02,
    accepted: true,
    failed: [],
    series: {
      frame,
      tS: frame.map((f) => f * 0.005),
      separationM,
      errorM: frame.map(() => 1.8e-6),
      lawM: separationM,
      flyByM: separationM.map((m) => m * 1.2),
    },
    ...fields,
  };
}

/** Candidates of a finished analysis. @returns their ids in order */
export async function makeCandidates(
  lab: Pick<LabRows, 'labId'>,
  analysisId: string,
  count: number,
  fieldsOf: (event: number) => Partial<CandidateFacts> = () => ({}),
): Promise<string[]> {
  const ids: string[] = [];
  for (let event = 0; event < count; event++) {
    const facts = candidateFacts(fieldsOf(event));
    const { trackA, trackB, t0S, pChance, qValue, accepted } = facts;
    const id = newId();
    await models().Candidate.create({
      id,
      labId: lab.labId,
      analysisId,
      event,
      trackA,
      trackB,
      t0S,
      pChance,
      qValue,
      accepted,
      facts,
    });
    ids.push(id);
  }
  return ids;
}

/** All candidates of an analysis given to a reader, without a word to them. @returns the assignment's id */
export async function makeAssignment(lab: LabRows, analysisId: string, readerId: string): Promise<string> {
  const id = newId();
  await execute(
    `INSERT INTO review_assignments (id, lab_id, analysis_id, reader_id, which, assigned_by)
     VALUES ($1, $2, $3, $4, 'all', $5)`,
    [id, lab.labId, analysisId, readerId, lab.userId],
  );
  return id;
}
