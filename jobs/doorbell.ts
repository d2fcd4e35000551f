import PgBoss from 'pg-boss';
import type { Transaction } from 'sequelize';
import { rawClient } from '@/models/raw-client';
import { callWorkers } from './wake-up';

/**
 * One queue for all kinds of work: a message only says "there is something to do", the work itself
 * stands in `job_runs`. A message that gets lost costs a worker one longer pause, nothing else.
 */
export const DOORBELL_QUEUE = 'beadline-work';

/** Nobody needs a bell that has not been heard for a day: workers also look by themselves. */
const BELL_KEPT_HOURS = 24;

const shared = globalThis as unknown as { beadlineDoorbell?: { url: string; boss: Promise<PgBoss> } };

/** The process's connection to the queue for ringing, opened on first use. */
function doorbell(): Promise<PgBoss> {
  const url = process.env.DATABASE_URL ?? '';
  if (shared.beadlineDoorbell?.url !== url) {
    const boss = openDoorbell(url);
    shared.beadlineDoorbell = { url, boss };
    // A server that was away must not be remembered as away for ever.
    boss.catch(() => {
      if (shared.beadlineDoorbell?.boss === boss) delete shared.beadlineDoorbell;
    });
  }
  return shared.beadlineDoorbell!.boss;
}

/** Opens the queue and makes its tables where they are missing. */
export async function openDoorbell(connectionString: string): Promise<PgBoss> {
  const boss = new PgBoss({ connectionString, supervise: false, schedule: false, max: 2 });
  // Without a listener a lost connection would end the process; the next call reports it anyway.
  boss.on('error', () => undefined);
  await boss.start();
  if (!(await boss.getQueue(DOORBELL_QUEUE))) {
    await boss.createQueue(DOORBELL_QUEUE, { name: DOORBELL_QUEUE, retryLimit: 0 });
  }
  return boss;
}

/** Rings when, and only when, the transaction commits; workers that listen come at once, others when they next look. */
export async function ring(jobRunId: string, transaction: Transaction): Promise<void> {
  const boss = await doorbell();
  const client = rawClient(transaction);
  await boss.send(
    DOORBELL_QUEUE,
    { jobRunId },
    {
      retryLimit: 0,
      retentionHours: BELL_KEPT_HOURS,
      db: { executeSql: (text, values) => client.query(text, values) },
    },
  );
  await callWorkers(transaction);
}

/** Ends the connection to the queue, if there is one. */
export async function closeDoorbell(): Promise<void> {
  const open = shared.beadlineDoorbell;
  delete shared.beadlineDoorbell;
  const boss = await open?.boss.catch(() => null);
  await boss?.stop({ graceful: false, wait: true });
}
