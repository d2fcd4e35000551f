/** What the audit trail says of each kind of act, after the name of who did it. */
export const AUDIT_WORDS: Record<string, string> = {
  'lab.made': 'made the laboratory',
  'member.invited': 'added to the laboratory',
  'member.invited-again': 'made a new invitation for',
  'member.removed': 'removed from the laboratory',
  'member.roles-changed': 'changed the roles of',
  'user.password-set': 'chose a new password',
  'token.made': 'made the token',
  'token.revoked': 'revoked the token',
  'campaign.removed': 'removed the campaign',
  'campaign.restored': 'restored the campaign',
  'run.removed': 'removed the run',
  'run.restored': 'restored the run',
  'recording.removed': 'removed the recording',
  'recording.restored': 'restored the recording',
  'analysis.started': 'started an analysis of',
  'analysis.stopped': 'stopped an analysis of',
};

/** Kinds of acts to choose from: the part before the point takes all of its kind. */
export const AUDIT_KINDS = [
  { value: '', label: 'Everything' },
  { value: 'member', label: 'People and roles' },
  { value: 'token', label: 'Tokens' },
  { value: 'user', label: 'Passwords' },
  { value: 'campaign', label: 'Campaigns' },
  { value: 'run', label: 'Runs' },
  { value: 'recording', label: 'Recordings' },
  { value: 'analysis', label: 'Analyses' },
] as const;
