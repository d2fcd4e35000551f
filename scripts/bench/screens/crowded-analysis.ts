import { randomBytes } from 'node:crypto';
import { mkdir, stat } from 'node:fs/promises';
import { hashPassword } from '@/auth/password';
import { writeTiff } from '@/jobs/write-tiff';
import { enqueueIngest } from '@/jobs/ingest-recording';
import { stackFile, stackFolder } from '@/jobs/stack-folder';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { finishAnalysis } from '@/models/queries/analysis-outcome';
import { writeTracks } from '@/models/queries/write-tracks';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import { mixedCamera, mixedScene } from '@/tracking/simulate/mixed-scene';
import { createRenderer } from '@/tracking/simulate/render';
import { trueTracks } from '@/tracking/simulate/true-tracks';

export interface CrowdedAnalysis {
  analysisId: string;
  email: string;
  password: string;
  frames: number;
  widthPx: number;
  heightPx: number;
}

const SIZE = { widthPx: 1024, heightPx: 1024, frames: 60, tracers: 5600 } as const;
const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 5e-3, sheetThickness_m: 1e-4 };
const SEED = 1;
const CHECKED_WITHIN_MS = 300_000;

/**
 * A recording with more than 5,000 tracers in sight, and an analysis of it whose tracks are the true
 * ones: how quick a screen is doesn't depend on who found them.
 */
export async function makeCrowdedAnalysis(): Promise<CrowdedAnalysis> {
  const { Lab, User, Membership, Campaign, Run, Recording, Analysis } = models();
  const [labId, userId, campaignId, runId, recordingId, analysisId] = Array.from({ length: 6 }, () =>
    newId(),
  );
  const slug = `bench-${randomBytes(4).toString('hex')}`;
  const password = randomBytes(15).toString('base64url');
  const email = `annotator@${slug}.test`;
  await Lab.create({ id: labId, name: 'Laboratory of the bench', slug });
  await User.create({ id: userId, name: 'Bench', email, passwordHash: await hashPassword(password) });
  await Membership.create({ id: newId(), labId, userId, roles: ['annotator'] });
  await Campaign.create({ id: campaignId, labId, name: 'Bench', createdBy: userId });
  await Run.create({
    id: runId,
    labId,
    campaignId,
    name: 'Crowded',
    pixelSizeM: CONDITIONS.pixelSize_m,
    frameIntervalS: CONDITIONS.frameInterval_s,
    sheetThicknessM: CONDITIONS.sheetThickness_m,
    createdBy: userId,
  });

  const scene = mixedScene({ set: 'dense', seed: SEED, ...SIZE });
  const renderer = createRenderer(scene, mixedCamera(SEED));
  await mkdir(stackFolder(recordingId), { recursive: true });
  const path = stackFile(recordingId);
  const { widthPx: width, heightPx: height, frames } = SIZE;
  await writeTiff(path, { width, height, frames, frame: (index) => renderer.renderFrame(index) });
  const { size } = await stat(path);
  await getSequelize().transaction(async (transaction) => {
    const recording = { id: recordingId, labId, runId, name: 'crowded.tif', kind: 'file' as const };
    await Recording.create(
      { ...recording, bytes: String(size), state: 'checking', createdBy: userId },
      { transaction },
    );
    await enqueueIngest({ recordingId, labId }, transaction);
  });
  await untilReady(recordingId);

  const { tracks } = trueTracks(scene, { sigmaPx: 0.12, seed: SEED, shortestTrackFrames: 3 });
  await Analysis.create({
    id: analysisId,
    labId,
    recordingId,
    recipeRequest: {},
    recipe: {
      ...RECIPE_DEFAULTS,
      spotSizePx: 1.2,
      gain: 2,
      readNoise_e: 1.5,
      closestApproach_m: 4e-5,
      lagsFrames: [1],
    },
    conditions: CONDITIONS,
    state: 'running',
    stage: 'measure-flow',
    frames,
    chunkFrames: 10,
    codeVersion: 'bench',
    createdBy: userId,
  });
  await getSequelize().transaction(async (transaction) => {
    await writeTracks(analysisId, tracks, transaction);
    const none = {
      trapped: 0,
      free: 0,
      undecided: 0,
      candidates: 0,
      acceptedCandidates: 0,
      bridgedPoints: 0,
    };
    const counts = { spots: tracks.frame.length, tracks: tracks.count, trackPoints: tracks.frame.length };
    await finishAnalysis(analysisId, { ...none, ...counts }, transaction);
    // Every kind of stroke is drawn, as it would be after the populations are told.
    await getSequelize().query('UPDATE tracks SET population = number % 3 WHERE analysis_id = $1', {
      bind: [analysisId],
      transaction,
    });
  });
  return { analysisId, email, password, frames, widthPx: width, heightPx: height };
}

async function untilReady(recordingId: string): Promise<void> {
  const end = Date.now() + CHECKED_WITHIN_MS;
  while (Date.now() < end) {
    const recording = await models().Recording.findByPk(recordingId);
    if (recording?.state === 'ready') return;
    if (recording?.state === 'refused') throw new Error('The recording of the bench was refused.');
    await new Promise((resolve) => setTimeout(resolve, 300));
  }
  throw new Error('The recording of the bench was not checked in time.');
}
