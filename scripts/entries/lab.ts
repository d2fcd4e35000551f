import { parseArgs } from 'node:util';
import { z } from 'zod';
import { baseUrl } from '@/lib/env';
import { newId } from '@/lib/ids';
import { formatBytes } from '@/lib/format/bytes';
import { nameSchema } from '@/lib/schemas/text';
import { makeInvitation } from '@/auth/invitations';
import { invitationPath } from '@/lib/link-secret';
import { closeDatabase, getSequelize } from '@/models/database';
import { models } from '@/models';
import { setQuota } from '@/models/queries/quota';
import { selectRow } from '@/models/queries/select';
import { writeAudit } from '@/models/queries/write-audit';
import { BadArguments, runCommand } from '@/lib/command-line';

const USAGE = 'Usage: npm run lab -- --name N --email E, or --name N --quota-gb G for one that is there';

async function main(): Promise<void> {
  const text = { type: 'string' } as const;
  const { values } = parseArgs({ options: { name: text, email: text, 'quota-gb': text } });
  const name = nameSchema.safeParse(values.name);
  if (name.success && values['quota-gb'] !== undefined && values.email === undefined) {
    return changeQuota(name.data, values['quota-gb']);
  }
  const email = z.email().safeParse(values.email);
  if (!name.success || !email.success) throw new BadArguments(USAGE);
  const invitation = makeInvitation(new Date());
  const isNew = await getSequelize().transaction(async (transaction) => {
    const slug = slugOf(name.data);
    const there = await selectRow('SELECT id FROM labs WHERE slug = $1', [slug], transaction);
    if (there) throw new BadArguments(`There is a laboratory named ${name.data} already.`);
    const { Lab, Membership, User } = models();
    const lab = await Lab.create({ id: newId(), name: name.data, slug }, { transaction });
    const known = await selectRow<{ id: string }>(
      'SELECT id FROM users WHERE lower(email) = lower($1)',
      [email.data],
      transaction,
    );
    const userId = known?.id ?? newId();
    if (!known) {
      const person = { id: userId, email: email.data, name: email.data.split('@')[0] };
      await User.create(
        { ...person, invitationHash: invitation.hash, invitationExpiresAt: invitation.expiresAt },
        { transaction },
      );
    }
    await Membership.create(
      { id: newId(), labId: lab.id, userId, roles: ['principal_investigator', 'lab_administrator'] },
      { transaction },
    );
    const entry = { labId: lab.id, userId, action: 'lab.made', subjectKind: 'lab', subjectId: lab.id };
    await writeAudit(entry, transaction);
    return !known;
  });
  const path = isNew ? invitationPath(invitation.text) : '/sign-in';
  process.stdout.write(`${baseUrl()}${path}
`);
}

/** Bounds what a laboratory may keep; 0 puts it back under the bound of all. */
async function changeQuota(name: string, gigabytes: string): Promise<void> {
  const bytes = /^\d+(\.\d+)?$/.test(gigabytes) ? Math.round(Number(gigabytes) * 1e9) : NaN;
  if (!Number.isSafeInteger(bytes))
    throw new BadArguments(`--quota-gb is a number of GB. Received '${gigabytes}'.`);
  const quota = await setQuota(slugOf(name), bytes === 0 ? null : bytes);
  if (quota === null) throw new BadArguments(`There is no laboratory named ${name}.`);
  process.stdout.write(`${name} may keep ${formatBytes(quota)}.\n`);
}

/** `Vortex Lab, Turku` becomes `vortex-lab-turku`. */
function slugOf(name: string): string {
  const slug = name
    .normalize('NFKD')
    .toLowerCase()
    .replace(/\p{M}/gu, '')
    .replace(/[^a-z0-9]+/g, '-')
    .replace(/^-+|-+$/g, '');
  return slug || newId();
}

await runCommand(main, closeDatabase);
