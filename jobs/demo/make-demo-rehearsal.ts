import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { selectRow } from '@/models/queries/select';
import type { RehearsalPlan } from '@/tracking/rehearsal/plan';
import { startRehearsal } from '../start-rehearsal';
import { writeDemoFile, type DemoFile } from './demo-accounts';
import { conditionsForScene, DEMO_CAMPAIGNS } from './demo-plan';

/** Stays the same for ever: by it a later start knows what is there. */
const KEY = 'rehearsal-of-run-3';

/** A rehearsal of the run of the demonstration in which most can be seen, made small: seconds of work. */
export const DEMO_REHEARSAL: { name: string; plan: RehearsalPlan } = {
  name: 'Run 3 with half the tracers',
  plan: {
    conditions: { ...DEMO_CAMPAIGNS[0].runs[2].conditions, ...conditionsForScene(DEMO_CAMPAIGNS[0].runs[2].conditions) }, // prettier-ignore
    scene: {
      widthPx: 224,
      heightPx: 224,
      frames: 90,
      seeding_m2: 1.4e7,
      trappedShare: 0.6,
      lineDensity_m2: null,
      brightness_e: 380,
      snr: null,
      brightnessSpread: 0.55,
      meetings: 8,
    },
    camera: { spotSizePx: 1.2, background_e: 12, readNoise_e: 1.5, edgeLight: 0.5 },
    seed: 1301,
  },
};

/** Asks for the rehearsal that is not there yet; the workers do the rest. Can be called again. */
export async function makeDemoRehearsal(labId: string, file: DemoFile): Promise<void> {
  const known = file.rehearsals[KEY];
  if (known && (await selectRow('SELECT id FROM rehearsals WHERE lab_id = $1 AND id = $2', [labId, known]))) return; // prettier-ignore
  const analyst = file.accounts.find(({ role }) => role === 'analyst');
  const maker = analyst && (await models().User.findOne({ where: { email: analyst.email } }));
  file.rehearsals[KEY] = await getSequelize().transaction((transaction) =>
    startRehearsal(
      {
        labId,
        userId: maker?.id ?? null,
        kind: 'simulated',
        recipe: {},
        sourceRecordingId: null,
        ...DEMO_REHEARSAL,
      },
      transaction,
    ),
  );
  await writeDemoFile(file);
}
