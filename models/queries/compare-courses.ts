import { formCurves } from '@/lib/compare/form-curves';
import type { Selection } from '@/lib/schemas/selection';
import type { CoursesView } from '@/lib/views/compare-view';
import type { FlowDetails } from '@/tracking/flow-measures';
import { selectRows } from './select';
import { selectedRuns } from './selected-runs';

type Course = CoursesView['runs'][number];
type Details = Pick<FlowDetails, 'overTime' | 'profiles'>;

/** Of so many runs at most: more curves tell nobody anything. */
const COURSES_MOST = 60;

/** Courses over time and profiles of the runs of a selection, the three forms fitted anew to what is plotted. */
export async function compareCourses(labId: string, selection: Selection): Promise<CoursesView> {
  const { runs } = await selectedRuns(labId, selection);
  const measured = runs.filter(({ found }) => found !== null).slice(0, COURSES_MOST);
  const rows = await selectRows<{ id: string; details: Details | null }>(
    `SELECT DISTINCT ON (a.id) a.id, jsonb_build_object('overTime', m.details->'overTime',
       'profiles', m.details->'profiles') AS details
     FROM analyses a JOIN analysis_measures m ON m.analysis_id = a.id
     WHERE a.lab_id = $1 AND a.id = ANY($2::uuid[]) AND m.details->'overTime' IS NOT NULL
     ORDER BY a.id, m.tracks_revision DESC`,
    [labId, measured.map(({ found }) => found!.analysisId)],
  );
  const details = new Map(rows.map((row) => [row.id, row.details]));
  const courses = measured.flatMap((run): Course[] => {
    const own = details.get(run.found!.analysisId);
    if (!own?.overTime) return [];
    return [
      {
        campaignName: run.campaign_name,
        runId: run.id,
        runName: run.name,
        analysisId: run.found!.analysisId,
        drive: run.conditions.drive ?? null,
        overTime: overTimeOf(own.overTime),
        profiles: profilesOf(own.profiles),
      },
    ];
  });
  return { runs: courses, without: runs.length - courses.length };
}

function overTimeOf({
  timeS,
  trappedPerAreaM2,
  densities,
  transient,
}: FlowDetails['overTime']): Course['overTime'] {
  // prettier-ignore
  const density = densities[0] ?? null;
  const { forms, verdict, chosen } = transient.forms.length > 0 ? formCurves(timeS, density ?? trappedPerAreaM2) : { forms: [], verdict: null, chosen: null }; // prettier-ignore
  const { value, low, high } = trappedPerAreaM2;
  return {
    time_s: timeS,
    trapped_m2: { value, low, high },
    density_m2: density && { method: density.method, value: density.value, low: density.low, high: density.high }, // prettier-ignore
    kind: transient.kind,
    note: transient.note,
    forms,
    verdict,
    chosen,
  };
}

function profilesOf(profiles: FlowDetails['profiles']): Course['profiles'] {
  if (!profiles) return null;
  return {
    place_m: profiles.placeM,
    fromWall: profiles.fromWall,
    freeAlong_m_s: profiles.freeAlongMS,
    trappedAlong_m_s: profiles.trappedAlongMS,
    spots_m2: profiles.spotsPerAreaM2,
    density_m2: profiles.densityM2,
  };
}
