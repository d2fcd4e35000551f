import { makeToken } from '@/auth/tokens';
import { ROLES, scopesOf, type Role } from '@/lib/access';
import { newId } from '@/lib/ids';
import { models } from '@/models';

/** A laboratory with a person and a token for each role, written straight into the database. */
export async function makeLab(): Promise<Record<Role, string>> {
  const { ApiToken, Lab, Membership, User } = models();
  const labId = newId();
  await Lab.create({ id: labId, name: 'Endurance Laboratory', slug: `endurance-${labId}` });
  const tokens = {} as Record<Role, string>;
  for (const role of ROLES) {
    const userId = newId();
    await User.create({ id: userId, name: `Test ${role}`, email: `${role}@endurance.test` });
    await Membership.create({ id: newId(), labId, userId, roles: [role] });
    const { token, tokenHash, hint } = makeToken();
    const scopes = scopesOf([role]);
    await ApiToken.create({ id: newId(), labId, userId, name: 'endure', tokenHash, hint, scopes });
    tokens[role] = token;
  }
  return tokens;
}
