import { mkdir, rename, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { dataDir } from '@/lib/env';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { enqueueIngest } from '../ingest-recording';
import { objectStore } from '../object-store';
import { stackFile, stackFolder } from '../stack-folder';
import { storeFile } from '../stack-store';
import { writeDemoFile, type DemoFile } from './demo-accounts';
import {
  conditionsForScene,
  DEMO_CAMPAIGNS,
  type DemoCampaign,
  type DemoRecording,
  type DemoRun,
} from './demo-plan';
import { makeDemoStack } from './make-demo-stack';

/**
 * Simulates the recordings that are not there yet and hands each over as if it had been uploaded:
 * the workers check and analyse it. Can be ended at any point and called again.
 */
export async function makeDemoRecordings(
  labId: string,
  file: DemoFile,
  say: (line: string) => void,
  campaigns: readonly DemoCampaign[] = DEMO_CAMPAIGNS,
): Promise<void> {
  for (const campaign of campaigns) {
    for (const run of campaign.runs) {
      for (const recording of run.recordings) {
        const known = file.recordings[recording.key];
        if (known && (await models().Recording.findOne({ where: { id: known, labId } }))) continue;
        say(`Simulating ${recording.name} (${run.name})`);
        const id = await makeRecording(labId, campaign.name, run, recording);
        if (!id) continue;
        file.recordings[recording.key] = id;
        await writeDemoFile(file);
      }
    }
  }
}

async function makeRecording(
  labId: string,
  campaignName: string,
  demoRun: DemoRun,
  { name, scene }: DemoRecording,
): Promise<string | null> {
  const { Campaign, Recording, Run } = models();
  const campaign = await Campaign.findOne({ where: { labId, name: campaignName, deletedAt: null } });
  const run = campaign && (await Run.findOne({ where: { labId, campaignId: campaign.id, name: demoRun.name, deletedAt: null } })); // prettier-ignore
  // Renamed or removed by somebody: it is theirs now.
  if (!run) return null;

  const id = newId();
  const workFolder = join(dataDir(), 'demo');
  await mkdir(workFolder, { recursive: true });
  const made = join(workFolder, name);
  await makeDemoStack(made, scene, conditionsForScene(demoRun.conditions));
  const { size } = await stat(made);
  if (objectStore()) {
    await storeFile(id, made, stackFile(id));
    await rm(made);
  } else {
    await mkdir(stackFolder(id), { recursive: true });
    await rename(made, stackFile(id));
  }
  await getSequelize().transaction(async (transaction) => {
    const userId = run.createdBy;
    const fields = { runId: run.id, name, kind: 'file' as const, bytes: String(size), createdBy: userId };
    await Recording.create({ id, labId, state: 'checking', ...fields }, { transaction });
    await enqueueIngest({ recordingId: id, labId, analyseWhenReady: { recipe: {}, userId } }, transaction);
  });
  return id;
}
