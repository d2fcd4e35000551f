/** Laboratories, people, what they may do, and what they did. */
export const peopleTables = [
  `CREATE TABLE labs (
    id uuid PRIMARY KEY,
    name text NOT NULL,
    slug text NOT NULL UNIQUE,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  `CREATE TABLE users (
    id uuid PRIMARY KEY,
    email text NOT NULL,
    name text NOT NULL,
    -- Null until the person has chosen a password through an invitation.
    password_hash text,
    -- A session carries this number; raising it ends every session of the account.
    session_version integer NOT NULL DEFAULT 1,
    invitation_hash bytea,
    invitation_expires_at timestamptz,
    disabled_at timestamptz,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  `CREATE UNIQUE INDEX users_email ON users (lower(email))`,
  `CREATE TABLE memberships (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    user_id uuid NOT NULL REFERENCES users,
    roles text[] NOT NULL CHECK (cardinality(roles) > 0),
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now(),
    UNIQUE (lab_id, user_id)
  )`,
  `CREATE TABLE api_tokens (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    user_id uuid NOT NULL REFERENCES users,
    name text NOT NULL,
    -- SHA-256 of the token; the token itself is shown once and kept nowhere.
    token_hash bytea NOT NULL UNIQUE,
    hint text NOT NULL,
    scopes text[] NOT NULL,
    last_used_at timestamptz,
    revoked_at timestamptz,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  `CREATE INDEX api_tokens_of_lab ON api_tokens (lab_id, user_id)`,
  // Sliding windows of sign-in tries and of requests, shared by all web processes.
  `CREATE TABLE rate_counters (
    key text NOT NULL,
    window_start timestamptz NOT NULL,
    count integer NOT NULL,
    PRIMARY KEY (key, window_start)
  )`,
  `CREATE TABLE idempotency_keys (
    user_id uuid NOT NULL REFERENCES users,
    lab_id uuid NOT NULL REFERENCES labs,
    key text NOT NULL,
    request_hash text NOT NULL,
    -- Null while the first request is still at work.
    status integer,
    body jsonb,
    created_at timestamptz NOT NULL DEFAULT now(),
    PRIMARY KEY (user_id, lab_id, key)
  )`,
  `CREATE TABLE audit_entries (
    id uuid PRIMARY KEY,
    lab_id uuid REFERENCES labs,
    user_id uuid REFERENCES users,
    action text NOT NULL,
    subject_kind text NOT NULL,
    subject_id text,
    detail jsonb NOT NULL DEFAULT '{}',
    created_at timestamptz NOT NULL DEFAULT now()
  )`,
  `CREATE INDEX audit_entries_of_lab ON audit_entries (lab_id, created_at DESC)`,
];
