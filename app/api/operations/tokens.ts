import { scopesOf, type Scope } from '@/lib/access';
import { LabError } from '@/lib/errors';
import type { TokenView } from '@/lib/views/lab-view';
import { assertMayTo, mayTo, type Viewer } from '@/auth/viewer';
import { makeToken } from '@/auth/tokens';
import { getToken, revokeToken, saveToken } from '@/models/queries/tokens';
import { writeAudit } from '@/models/queries/write-audit';

/** Whose tokens a person sees: their own, or everybody's (null). */
export const ownerShown = (viewer: Viewer): string | null =>
  mayTo(viewer, 'own-tokens', []) ? null : viewer.userId;

/** Makes a token; a token made with another token can't do more than that one. */
export async function makeOwnToken(
  viewer: Viewer,
  { name, scopes }: { name: string; scopes?: Scope[] },
): Promise<TokenView & { token: string }> {
  const allowed = viewer.via === 'token' ? viewer.scopes : scopesOf(viewer.roles);
  const beyond = scopes?.find((scope) => !allowed.includes(scope));
  if (beyond) {
    const message = `You can't give the scope '${beyond}': your roles allow ${allowed.join(', ')}.`;
    throw new LabError('FORBIDDEN', message, { errors: [{ path: 'scopes', message }] });
  }
  const { token, tokenHash, hint } = makeToken();
  const { labId, userId } = viewer;
  const view = await saveToken({ labId, userId, name, scopes: scopes ?? allowed, tokenHash, hint });
  await writeAudit({ labId, userId, action: 'token.made', subjectKind: 'token', subjectId: view.id });
  return { ...view, token };
}

export async function revokeTokenOf(viewer: Viewer, tokenId: string): Promise<void> {
  const { labId, userId } = viewer;
  const token = await getToken(labId, tokenId);
  assertMayTo(viewer, 'own-tokens', [token.owner.id]);
  await revokeToken(labId, tokenId);
  await writeAudit({ labId, userId, action: 'token.revoked', subjectKind: 'token', subjectId: tokenId });
}
