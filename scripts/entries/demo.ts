import { rm } from 'node:fs/promises';
import { join } from 'node:path';
import { hashPassword } from '@/auth/password';
import { newDemoFile, readDemoFile, signInText, writeDemoFile } from '@/jobs/demo/demo-accounts';
import { ensureDemoLab, resetPasswords } from '@/jobs/demo/make-demo-lab';
import { makeDemoRecordings } from '@/jobs/demo/make-demo-recordings';
import { makeDemoRehearsal } from '@/jobs/demo/make-demo-rehearsal';
import { closeDoorbell } from '@/jobs/doorbell';
import { dataDir } from '@/lib/env';
import { closeDatabase } from '@/models/database';

// The file comes first: a start that is ended half-way must not leave accounts whose passwords nobody has.
const known = await readDemoFile();
const file = known ?? newDemoFile();
if (!known) await writeDemoFile(file);

const labId = await ensureDemoLab(file, hashPassword);
if (!known) await resetPasswords(file, hashPassword);
await makeDemoRecordings(labId, file, (line) => process.stderr.write(`  ${line}\n`));
await makeDemoRehearsal(labId, file);
await rm(join(dataDir(), 'demo'), { recursive: true, force: true });
await closeDoorbell();
await closeDatabase();
process.stdout.write(`${signInText(file)}\n`);
