import { parseArgs } from 'node:util';
import { z } from 'zod';
import { baseUrl } from '@/lib/env';
import { newId } from '@/lib/ids';
import { nameSchema } from '@/lib/schemas/text';
import { makeInvitation } from '@/auth/invitations';
import { invitationPath } from '@/lib/link-secret';
import { closeDatabase, getSequelize } from '@/models/database';
import { models } from '@/models';
import { selectRow } from '@/models/queries/select';
import { writeAudit } from '@/models/queries/write-audit';
import { BadArguments, runCommand } from '@/lib/command-line';

const USAGE = 'Usage: npm run lab -- --name N --email E';

async function main(): Promise<void> {
  const { values } = parseArgs({ options: { name: { type: 'string' }, email: { type: 'string' } } });
  const name = nameSchema.safeParse(values.name);
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
