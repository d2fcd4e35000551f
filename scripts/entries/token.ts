import { parseArgs } from 'node:util';
import { SCOPES, scopesOf, type Role, type Scope } from '@/lib/access';
import { nameSchema } from '@/lib/schemas/text';
import { makeToken } from '@/auth/tokens';
import { closeDatabase } from '@/models/database';
import { selectRows } from '@/models/queries/select';
import { saveToken } from '@/models/queries/tokens';
import { writeAudit } from '@/models/queries/write-audit';
import { BadArguments, runCommand } from '@/lib/command-line';

const USAGE =
  'Usage: npm run --silent token -- --email E --name N [--lab L] [--scopes read,write,review,export]';

interface Row {
  user_id: string;
  lab_id: string;
  slug: string;
  roles: Role[];
}

async function main(): Promise<void> {
  const { values } = parseArgs({
    options: {
      email: { type: 'string' },
      name: { type: 'string' },
      lab: { type: 'string' },
      scopes: { type: 'string' },
    },
  });
  const name = nameSchema.safeParse(values.name);
  if (!values.email || !name.success) throw new BadArguments(USAGE);
  const { user_id: userId, lab_id: labId, roles } = await membership(values.email, values.lab);
  const scopes = chosenScopes(values.scopes, roles);
  const { token, tokenHash, hint } = makeToken();
  const view = await saveToken({ labId, userId, name: name.data, scopes, tokenHash, hint });
  await writeAudit({ labId, userId, action: 'token.made', subjectKind: 'token', subjectId: view.id });
  process.stdout.write(`${token}\n`);
}

async function membership(email: string, lab: string | undefined): Promise<Row> {
  const rows = await selectRows<Row>(
    `SELECT u.id AS user_id, l.id AS lab_id, l.slug, m.roles
     FROM users u JOIN memberships m ON m.user_id = u.id JOIN labs l ON l.id = m.lab_id
     WHERE lower(u.email) = lower($1) AND u.disabled_at IS NULL
       AND ($2::text IS NULL OR lower(l.name) = lower($2) OR l.slug = $2 OR l.id::text = $2)
     ORDER BY l.name`,
    [email, lab ?? null],
  );
  if (rows.length === 1) return rows[0];
  if (rows.length > 1) {
    const labs = rows.map(({ slug }) => slug).join(', ');
    throw new BadArguments(`${email} is in several laboratories. Add --lab: ${labs}.`);
  }
  throw new BadArguments(
    lab ? `${email} is not a member of ${lab}.` : `There is no member with the e-mail ${email}.`,
  );
}

function chosenScopes(text: string | undefined, roles: Role[]): Scope[] {
  const allowed = scopesOf(roles);
  if (text === undefined) return allowed;
  const names = [...new Set(text.split(',').map((scope) => scope.trim()))];
  for (const scope of names) {
    if (!SCOPES.includes(scope as Scope)) {
      throw new BadArguments(`Unknown scope '${scope}'. Scopes: ${SCOPES.join(', ')}.`);
    }
    if (!allowed.includes(scope as Scope)) {
      throw new BadArguments(`The roles of this person allow ${allowed.join(', ')}, not '${scope}'.`);
    }
  }
  return names as Scope[];
}

await runCommand(main, closeDatabase);
