import type { Viewer } from '@/auth/viewer';
import type { MeView } from '@/lib/views/lab-view';

/** What a person sees of themselves. */
export function meView({ userId, name, email, lab, roles, scopes, labs }: Viewer): MeView {
  return { id: userId, name, email, lab, roles, scopes, labs };
}
