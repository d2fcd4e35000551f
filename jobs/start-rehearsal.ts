import type { Transaction } from 'sequelize';
import { addRehearsal, type NewRehearsal } from '@/models/queries/rehearsal-work';
import { enqueueJob } from './queue';
import { simulateRehearsalJob } from './simulate-rehearsal';

/** Writes a rehearsal and asks for its frames in the caller's transaction. @returns its id */
export async function startRehearsal(order: NewRehearsal, transaction: Transaction): Promise<string> {
  const id = await addRehearsal(order, transaction);
  await enqueueJob(simulateRehearsalJob, { labId: order.labId, subjectId: id, payload: {} }, transaction);
  return id;
}
