import type { QueryInterface } from 'sequelize';

const statements = [
  `CREATE TABLE mails (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    -- To whom: the address is the one that the account has when the mail is sent.
    user_id uuid NOT NULL REFERENCES users,
    kind text NOT NULL,
    -- What the words are made of, never a secret: a link gets its own at the moment of sending.
    facts jsonb NOT NULL DEFAULT '{}',
    -- About an account that other laboratories share: not for the eyes of this one.
    personal boolean NOT NULL DEFAULT false,
    state text NOT NULL CHECK (state IN ('waiting', 'sent', 'kept', 'dropped', 'failed')),
    recipient text,
    subject text,
    -- Only of mail that was kept here for want of a mail server.
    body_text text,
    body_html text,
    sent_at timestamptz,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  'CREATE INDEX mails_of_lab ON mails (lab_id, created_at DESC)',
  'CREATE INDEX mails_of_user ON mails (user_id, created_at DESC)',
  // Links that went out by mail; the link that an administrator is shown stands in `users`.
  `CREATE TABLE account_links (
    -- SHA-256 of the secret in the link.
    hash bytea PRIMARY KEY,
    user_id uuid NOT NULL REFERENCES users,
    purpose text NOT NULL CHECK (purpose IN ('invitation', 'password-reset')),
    expires_at timestamptz NOT NULL,
    created_at timestamptz NOT NULL DEFAULT now()
  )`,
  'CREATE INDEX account_links_of_user ON account_links (user_id, purpose)',
  // Kinds of notices that a member does not want.
  `ALTER TABLE memberships ADD COLUMN notices_off text[] NOT NULL DEFAULT '{}'`,
  // The last look at the stored files of a recording.
  `CREATE TABLE file_checks (
    recording_id uuid PRIMARY KEY REFERENCES recordings,
    lab_id uuid NOT NULL REFERENCES labs,
    state text NOT NULL CHECK (state IN ('intact', 'damaged', 'missing')),
    detail text,
    checked_at timestamptz NOT NULL DEFAULT now(),
    -- When it was first seen not to be intact; null while it is.
    since timestamptz
  )`,
  'CREATE INDEX file_checks_of_lab ON file_checks (lab_id, checked_at)',
];

export async function up({ sequelize }: QueryInterface): Promise<void> {
  for (const statement of statements) await sequelize.query(statement);
}

export async function down({ sequelize }: QueryInterface): Promise<void> {
  await sequelize.query('DROP TABLE IF EXISTS file_checks, account_links, mails');
  await sequelize.query('ALTER TABLE memberships DROP COLUMN IF EXISTS notices_off');
}
