import type { Transaction } from 'sequelize';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import type { RunConditions } from '@/tracking/flow/run-conditions';
import type { DemoFile } from './demo-accounts';
import { DEMO_LAB } from './demo-people';
import { DEMO_CAMPAIGNS } from './demo-plan';

export type HashPassword = (password: string) => Promise<string>;

/** Makes the laboratory with its people, campaigns and runs where it is missing. @returns its id */
export async function ensureDemoLab(file: DemoFile, hashPassword: HashPassword): Promise<string> {
  const hashes = new Map<string, string>();
  for (const { email, password } of file.accounts) hashes.set(email, await hashPassword(password));
  return getSequelize().transaction(async (transaction) => {
    const { Lab } = models();
    const known = await Lab.findOne({ where: { slug: DEMO_LAB.slug }, transaction });
    if (known) return known.id;
    const { id: labId } = await Lab.create({ id: newId(), ...DEMO_LAB }, { transaction });
    const people = await addPeople(labId, file, hashes, transaction);
    await addCampaigns(labId, people, transaction);
    return labId;
  });
}

/** Gives the accounts the passwords of the file: for a file that was lost while the database was kept. */
export async function resetPasswords(file: DemoFile, hashPassword: HashPassword): Promise<void> {
  const { User } = models();
  for (const { email, password } of file.accounts) {
    await User.update({ passwordHash: await hashPassword(password) }, { where: { email } });
  }
}

async function addPeople(
  labId: string,
  file: DemoFile,
  hashes: ReadonlyMap<string, string>,
  transaction: Transaction,
): Promise<Map<string, string>> {
  const { Membership, User } = models();
  const ids = new Map<string, string>();
  for (const { role, name, email } of file.accounts) {
    const userId = newId();
    ids.set(role, userId);
    await User.create({ id: userId, name, email, passwordHash: hashes.get(email) }, { transaction });
    await Membership.create({ id: newId(), labId, userId, roles: [role] }, { transaction });
  }
  return ids;
}

async function addCampaigns(labId: string, people: ReadonlyMap<string, string>, transaction: Transaction) {
  const { Campaign, RecipeVersion, Run } = models();
  const createdBy = people.get('experimentalist') ?? null;
  for (const { runs, ...campaign } of DEMO_CAMPAIGNS) {
    const { id: campaignId } = await Campaign.create(
      { id: newId(), labId, createdBy, ...campaign },
      { transaction },
    );
    for (const { name, tags, notes, startedAt, conditions } of runs) {
      const fields = { name, tags, notes: notes || null, startedAt: startedAt ? new Date(startedAt) : null };
      await Run.create(
        { id: newId(), labId, campaignId, createdBy, ...fields, ...columnsOf(conditions) },
        { transaction },
      );
    }
  }
  const recipe = {
    name: 'Slow counterflow',
    version: 1,
    note: 'Everything from the recording itself.',
    fields: {},
  };
  await RecipeVersion.create(
    { id: newId(), labId, createdBy: people.get('analyst') ?? null, ...recipe },
    { transaction },
  );
}

function columnsOf(c: RunConditions) {
  return {
    pixelSizeM: c.pixelSize_m,
    frameIntervalS: c.frameInterval_s,
    exposureS: c.exposure_s,
    sheetThicknessM: c.sheetThickness_m,
    temperatureK: c.temperature_K,
    drive: c.drive,
    heatFluxWM2: c.heatFlux_W_m2,
    flowDirection: c.flowDirection,
    gravityDirection: c.gravityDirection,
    tracer: c.tracer,
    channel: c.channel,
    tracersPerAreaM2: c.tracersPerArea_m2,
  };
}
