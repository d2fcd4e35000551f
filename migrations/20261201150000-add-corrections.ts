import type { QueryInterface } from 'sequelize';
import { sealTable } from './seal-table';

/** Tables that a signed-off analysis keeps as they are, by the column that leads to it. */
const SEALED = ['corrections', 'tracks', 'track_points', 'spot_chunks', 'analysis_measures', 'candidates'];

const statements = [
  `ALTER TABLE analyses
     -- Since when results are older than the tracks; null where they fit.
     ADD COLUMN stale_since timestamptz,
     ADD COLUMN signed_off_at timestamptz,
     ADD COLUMN signed_off_by uuid REFERENCES users,
     -- SHA-256 over everything that was signed off, hex.
     ADD COLUMN content_hash text,
     ADD CONSTRAINT analyses_signed_whole CHECK ((signed_off_at IS NULL) = (content_hash IS NULL))`,
  `ALTER TABLE tracks
     -- Differs from what linking made.
     ADD COLUMN changed boolean NOT NULL DEFAULT false,
     -- Populations given by a person: [[first frame, last frame, code], ...].
     ADD COLUMN given jsonb`,
  `ALTER TABLE analysis_measures
     -- Kept beside once corrections made others: counts and candidates of this revision.
     ADD COLUMN summary jsonb,
     ADD COLUMN candidates jsonb`,
  // Not among the candidates of the tracks as they are now; kept for what people said of it.
  'ALTER TABLE candidates ADD COLUMN ended_revision integer',
  `CREATE TABLE corrections (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    analysis_id uuid NOT NULL REFERENCES analyses,
    -- Place in the analysis's log, from 1: the revision of the tracks that it made.
    seq integer NOT NULL,
    kind text NOT NULL CHECK (kind IN ('split', 'join', 'trim', 'remove', 'add-point', 'move-point', 'reclass', 'undo')),
    -- What the kind needs, under the names of the API.
    fields jsonb NOT NULL,
    -- Corrections of one gesture are taken back together.
    gesture uuid,
    -- Number of the track that it made.
    made_track integer,
    -- Idempotency-Key of the request: sent again, it is found here.
    request_key text,
    created_by uuid NOT NULL REFERENCES users,
    created_at timestamptz NOT NULL DEFAULT now(),
    UNIQUE (analysis_id, seq)
  )`,
  'CREATE INDEX corrections_of_request ON corrections (analysis_id, created_by, request_key) WHERE request_key IS NOT NULL',
  // Who has an analysis open; a row is renewed while the page is, and means nothing once it is old.
  `CREATE TABLE presences (
    analysis_id uuid NOT NULL REFERENCES analyses,
    user_id uuid NOT NULL REFERENCES users,
    lab_id uuid NOT NULL REFERENCES labs,
    place text NOT NULL,
    frame integer,
    seen_at timestamptz NOT NULL DEFAULT now(),
    PRIMARY KEY (analysis_id, user_id)
  )`,
  `CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
   BEGIN
     RAISE EXCEPTION 'Rows of % are never changed or removed: they are a log.', TG_TABLE_NAME USING ERRCODE = 'BL002';
   END $$`,
  `CREATE FUNCTION refuse_after_sign_off() RETURNS trigger LANGUAGE plpgsql AS $$
   DECLARE
     column_name text := coalesce(TG_ARGV[0], 'analysis_id');
     ids uuid[] := '{}';
     signed uuid;
   BEGIN
     IF TG_OP = 'TRUNCATE' THEN
       SELECT id INTO signed FROM analyses WHERE signed_off_at IS NOT NULL LIMIT 1;
     ELSE
       IF column_name = 'analysis_id' THEN
         IF TG_OP <> 'INSERT' THEN ids := ids || OLD.analysis_id; END IF;
         IF TG_OP <> 'DELETE' THEN ids := ids || NEW.analysis_id; END IF;
       ELSE
         IF TG_OP <> 'INSERT' THEN ids := ids || (SELECT analysis_id FROM candidates WHERE id = OLD.candidate_id); END IF;
         IF TG_OP <> 'DELETE' THEN ids := ids || (SELECT analysis_id FROM candidates WHERE id = NEW.candidate_id); END IF;
       END IF;
       -- The lock keeps a sign-off out until this change is settled, and waits for one that is under way.
       PERFORM 1 FROM analyses WHERE id = ANY (ids) FOR SHARE;
       SELECT id INTO signed FROM analyses WHERE id = ANY (ids) AND signed_off_at IS NOT NULL LIMIT 1;
     END IF;
     IF signed IS NOT NULL THEN
       RAISE EXCEPTION 'Analysis % was signed off: its % can not be changed.', signed, TG_TABLE_NAME USING ERRCODE = 'BL001';
     END IF;
     IF TG_OP = 'DELETE' THEN RETURN OLD; END IF;
     RETURN NEW;
   END $$`,
  `CREATE FUNCTION refuse_change_of_signed() RETURNS trigger LANGUAGE plpgsql AS $$
   BEGIN
     IF TG_OP = 'TRUNCATE' THEN
       IF EXISTS (SELECT 1 FROM analyses WHERE signed_off_at IS NOT NULL) THEN
         RAISE EXCEPTION 'There are signed-off analyses: they can not be removed.' USING ERRCODE = 'BL001';
       END IF;
       RETURN NULL;
     END IF;
     IF OLD.signed_off_at IS NOT NULL THEN
       RAISE EXCEPTION 'Analysis % was signed off: it can not be changed.', OLD.id USING ERRCODE = 'BL001';
     END IF;
     IF TG_OP = 'DELETE' THEN RETURN OLD; END IF;
     RETURN NEW;
   END $$`,
  `CREATE TRIGGER analyses_sealed BEFORE UPDATE OR DELETE ON analyses
     FOR EACH ROW EXECUTE FUNCTION refuse_change_of_signed()`,
  `CREATE TRIGGER analyses_sealed_whole BEFORE TRUNCATE ON analyses
     FOR EACH STATEMENT EXECUTE FUNCTION refuse_change_of_signed()`,
  'ALTER TABLE analyses ENABLE ALWAYS TRIGGER analyses_sealed',
  'ALTER TABLE analyses ENABLE ALWAYS TRIGGER analyses_sealed_whole',
  ...SEALED.flatMap((table) => sealTable(table)),
  `CREATE TRIGGER corrections_log BEFORE UPDATE OR DELETE ON corrections
     FOR EACH ROW EXECUTE FUNCTION refuse_change()`,
  `CREATE TRIGGER corrections_log_whole BEFORE TRUNCATE ON corrections
     FOR EACH STATEMENT EXECUTE FUNCTION refuse_change()`,
  'ALTER TABLE corrections ENABLE ALWAYS TRIGGER corrections_log',
  'ALTER TABLE corrections ENABLE ALWAYS TRIGGER corrections_log_whole',
];

export async function up(queryInterface: QueryInterface): Promise<void> {
  for (const statement of statements) await queryInterface.sequelize.query(statement);
}

export async function down(queryInterface: QueryInterface): Promise<void> {
  for (const statement of [
    'DROP TABLE presences, corrections',
    ...['analyses', ...SEALED.slice(1)].flatMap((table) => [
      `DROP TRIGGER ${table}_sealed ON ${table}`,
      `DROP TRIGGER ${table}_sealed_whole ON ${table}`,
    ]),
    'DROP FUNCTION refuse_after_sign_off, refuse_change_of_signed, refuse_change',
    'ALTER TABLE candidates DROP COLUMN ended_revision',
    'ALTER TABLE analysis_measures DROP COLUMN summary, DROP COLUMN candidates',
    'ALTER TABLE tracks DROP COLUMN changed, DROP COLUMN given',
    `ALTER TABLE analyses DROP CONSTRAINT analyses_signed_whole, DROP COLUMN stale_since, DROP COLUMN signed_off_at,
       DROP COLUMN signed_off_by, DROP COLUMN content_hash`,
  ]) {
    await queryInterface.sequelize.query(statement);
  }
}
