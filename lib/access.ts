/** The five roles a person can have in a laboratory. */
export const ROLES = [
  'experimentalist',
  'annotator',
  'analyst',
  'principal_investigator',
  'lab_administrator',
] as const;
export type Role = (typeof ROLES)[number];

export const ROLE_NAMES: Record<Role, string> = {
  experimentalist: 'Experimentalist',
  annotator: 'Annotator',
  analyst: 'Analyst',
  principal_investigator: 'Principal investigator',
  lab_administrator: 'Lab administrator',
};

/** What an API token may do; a token never exceeds its owner's roles. */
export const SCOPES = ['read', 'write', 'review', 'export'] as const;
export type Scope = (typeof SCOPES)[number];

/** `own`: only on what the person made, or in a run of theirs. */
export type Grant = 'yes' | 'own';

interface Rule {
  scope: Scope;
  grants: Partial<Record<Role, Grant>>;
}

const everyone = { experimentalist: 'yes', annotator: 'yes', analyst: 'yes', principal_investigator: 'yes', lab_administrator: 'yes' } as const; // prettier-ignore
const analysts = { experimentalist: 'yes', analyst: 'yes', principal_investigator: 'yes' } as const;
const ownOfAnalysts = { experimentalist: 'own', analyst: 'own', principal_investigator: 'yes' } as const;
const scientists = { experimentalist: 'yes', annotator: 'yes', analyst: 'yes', principal_investigator: 'yes' } as const; // prettier-ignore

/**
 * Who may do what. The wrapper of every page, action and route names one of these actions, and
 * the tests of access are generated from this table.
 */
export const ACTIONS = {
  'own-account': { scope: 'read', grants: everyone },
  // An administrator sees that things exist and how large they are, not what is in them.
  'list-records': { scope: 'read', grants: everyone },
  'see-data': { scope: 'read', grants: scientists },
  compare: { scope: 'read', grants: analysts },
  // Selections are everybody's who compares; one changes one's own.
  'save-selection': { scope: 'write', grants: analysts },
  'edit-selection': { scope: 'write', grants: ownOfAnalysts },
  'leave-out-run': { scope: 'write', grants: { analyst: 'yes', principal_investigator: 'yes' } },
  'create-campaign': { scope: 'write', grants: { experimentalist: 'yes', principal_investigator: 'yes' } },
  'edit-campaign': { scope: 'write', grants: { experimentalist: 'own', principal_investigator: 'yes' } },
  'create-run': { scope: 'write', grants: { experimentalist: 'yes', principal_investigator: 'yes' } },
  'edit-run': { scope: 'write', grants: { experimentalist: 'own', principal_investigator: 'yes' } },
  remove: { scope: 'write', grants: { experimentalist: 'own', principal_investigator: 'yes' } },
  restore: {
    scope: 'write',
    grants: { experimentalist: 'own', principal_investigator: 'yes', lab_administrator: 'yes' },
  },
  upload: { scope: 'write', grants: { experimentalist: 'yes', principal_investigator: 'yes' } },
  'end-upload': {
    scope: 'write',
    grants: { experimentalist: 'own', principal_investigator: 'yes', lab_administrator: 'yes' },
  },
  'edit-recording': { scope: 'write', grants: { experimentalist: 'own', principal_investigator: 'yes' } },
  'try-recipe': { scope: 'write', grants: analysts },
  'start-analysis': { scope: 'write', grants: analysts },
  'stop-analysis': {
    scope: 'write',
    grants: {
      experimentalist: 'own',
      analyst: 'own',
      principal_investigator: 'yes',
      lab_administrator: 'yes',
    },
  },
  'make-rehearsal': { scope: 'write', grants: analysts },
  'remove-rehearsal': { scope: 'write', grants: ownOfAnalysts },
  'correct-tracks': {
    scope: 'review',
    grants: { experimentalist: 'yes', annotator: 'yes', principal_investigator: 'yes' },
  },
  // What is signed off can't be changed by anybody, the principal investigator included.
  'sign-off': { scope: 'review', grants: { principal_investigator: 'yes' } },
  'save-recipe': { scope: 'write', grants: analysts },
  'download-tables': { scope: 'export', grants: analysts },
  // What waits to be judged, by whom, and how well readers agree.
  'see-review': { scope: 'read', grants: scientists },
  review: { scope: 'review', grants: { annotator: 'yes' } },
  settle: { scope: 'review', grants: { principal_investigator: 'yes' } },
  'assign-review': { scope: 'write', grants: { experimentalist: 'yes', principal_investigator: 'yes' } },
  'see-exports': { scope: 'export', grants: analysts },
  export: { scope: 'export', grants: analysts },
  'stop-export': { scope: 'export', grants: ownOfAnalysts },
  'see-queue': { scope: 'read', grants: { principal_investigator: 'yes', lab_administrator: 'yes' } },
  'see-storage': { scope: 'read', grants: { principal_investigator: 'yes', lab_administrator: 'yes' } },
  'see-people': { scope: 'read', grants: { principal_investigator: 'yes', lab_administrator: 'yes' } },
  'see-audit': {
    scope: 'read',
    grants: {
      experimentalist: 'own',
      annotator: 'own',
      analyst: 'own',
      principal_investigator: 'yes',
      lab_administrator: 'yes',
    },
  },
  // Work that failed is asked for again; what it was asked to do stays.
  'run-again': { scope: 'write', grants: { principal_investigator: 'yes', lab_administrator: 'yes' } },
  'check-files': { scope: 'write', grants: { lab_administrator: 'yes' } },
  'see-mail': { scope: 'read', grants: { lab_administrator: 'yes' } },
  'manage-people': { scope: 'write', grants: { lab_administrator: 'yes' } },
  'own-tokens': {
    scope: 'write',
    grants: {
      experimentalist: 'own',
      analyst: 'own',
      principal_investigator: 'own',
      lab_administrator: 'yes',
    },
  },
} as const satisfies Record<string, Rule>;

export type Action = keyof typeof ACTIONS;

/** The widest grant that any of the person's roles gives; null for none. */
export function grantFor(roles: readonly Role[], action: Action): Grant | null {
  const grants: Partial<Record<Role, Grant>> = ACTIONS[action].grants;
  let best: Grant | null = null;
  for (const role of roles) {
    if (grants[role] === 'yes') return 'yes';
    if (grants[role] === 'own') best = 'own';
  }
  return best;
}

/** Scopes that a person of these roles can give to a token. */
export function scopesOf(roles: readonly Role[]): Scope[] {
  const scopes = new Set<Scope>();
  for (const action of Object.keys(ACTIONS) as Action[]) {
    if (grantFor(roles, action)) scopes.add(ACTIONS[action].scope);
  }
  return SCOPES.filter((scope) => scopes.has(scope));
}

/** Names of the roles that may do it, for the sentence that a person without the right reads. */
export function whoMay(action: Action): string {
  const grants: Partial<Record<Role, Grant>> = ACTIONS[action].grants;
  const names = ROLES.filter((role) => grants[role]).map((role) => ROLE_NAMES[role].toLowerCase());
  return names.length > 1 ? `${names.slice(0, -1).join(', ')} or ${names.at(-1)}` : (names[0] ?? 'nobody');
}
