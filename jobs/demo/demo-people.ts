import type { Role } from '@/lib/access';

/** An invented laboratory; `.test` addresses can belong to nobody (RFC 2606). */
export const DEMO_LAB = { name: 'Ravnsund Demonstration Laboratory', slug: 'ravnsund-demo' };

export const DEMO_DOMAIN = 'ravnsund.test';

const NAMES: Record<Role, string> = {
  experimentalist: 'Edda Marrow',
  annotator: 'Tobi Quill',
  analyst: 'Ana Northgate',
  principal_investigator: 'Pelle Isgard',
  lab_administrator: 'Lova Ledgerby',
};

export interface DemoPerson {
  role: Role;
  name: string;
  email: string;
}

/** One person per role. */
export const DEMO_PEOPLE: readonly DemoPerson[] = (Object.entries(NAMES) as [Role, string][]).map(
  ([role, name]) => ({ role, name, email: `${role.replaceAll('_', '-')}@${DEMO_DOMAIN}` }),
);
