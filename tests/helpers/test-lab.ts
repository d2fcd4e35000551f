import { randomBytes } from 'node:crypto';
import { hashPassword } from '@/auth/password';
import { makeToken } from '@/auth/tokens';
import { ROLES, scopesOf, type Role } from '@/lib/access';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { closeDatabase } from '@/models/database';

export interface LabPerson {
  userId: string;
  role: Role;
  name: string;
  email: string;
  password: string;
  /** API token with all that the role may do. */
  token: string;
}

export interface TestLab {
  labId: string;
  name: string;
  people: Record<Role, LabPerson>;
}

/**
 * A laboratory with one person per role, written straight into the database of the product under
 * test: making people is not what these tests are about.
 */
export async function makeTestLab(
  databaseUrl: string,
  name = 'Hollow Reach Test Laboratory',
): Promise<TestLab> {
  if (process.env.DATABASE_URL !== databaseUrl) {
    await closeDatabase();
    process.env.DATABASE_URL = databaseUrl;
  }
  const { Lab, User, Membership, ApiToken } = models();
  const labId = newId();
  const slug = `lab-${randomBytes(4).toString('hex')}`;
  await Lab.create({ id: labId, name, slug });
  const people = {} as Record<Role, LabPerson>;
  for (const role of ROLES) {
    const userId = newId();
    const email = `${role.replaceAll('_', '-')}@${slug}.test`;
    const password = randomBytes(15).toString('base64url');
    const person = `Test ${role.replaceAll('_', ' ')}`;
    await User.create({ id: userId, name: person, email, passwordHash: await hashPassword(password) });
    await Membership.create({ id: newId(), labId, userId, roles: [role] });
    const { token, tokenHash, hint } = makeToken();
    await ApiToken.create({
      id: newId(),
      labId,
      userId,
      name: 'test',
      tokenHash,
      hint,
      scopes: scopesOf([role]),
    });
    people[role] = { userId, role, name: person, email, password, token };
  }
  return { labId, name, people };
}
