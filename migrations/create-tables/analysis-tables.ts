/**
 * Recipes, analyses and their results. Tracks are kept by revision: a row is valid from
 * `born_revision` until `ended_revision`, so that a correction adds rows and changes none.
 */
export const analysisTables = [
  `CREATE TABLE recipes (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    name text NOT NULL,
    version integer NOT NULL,
    note text,
    fields jsonb NOT NULL,
    created_by uuid REFERENCES users,
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now(),
    UNIQUE (lab_id, name, version)
  )`,
  `CREATE TABLE analyses (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    recording_id uuid NOT NULL REFERENCES recordings,
    recipe_id uuid REFERENCES recipes,
    -- As asked for, and with every value filled in once the image has been measured.
    recipe_request jsonb NOT NULL,
    recipe jsonb,
    -- The run's conditions when the analysis began: later edits of the run don't change it.
    conditions jsonb NOT NULL,
    state text NOT NULL CHECK (state IN ('waiting', 'running', 'done', 'failed', 'stopped')),
    stage text NOT NULL,
    progress double precision NOT NULL DEFAULT 0,
    frames integer NOT NULL,
    chunk_frames integer NOT NULL,
    -- Measured once, shared by all chunks.
    image_model bytea,
    image_facts jsonb,
    summary jsonb,
    spots_per_frame integer[],
    tracks_revision integer NOT NULL DEFAULT 0,
    code_version text NOT NULL,
    error_code text,
    error_detail text,
    started_at timestamptz,
    finished_at timestamptz,
    created_by uuid REFERENCES users,
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now()
  )`,
  `CREATE INDEX analyses_of_recording ON analyses (lab_id, recording_id, created_at DESC)`,
  `CREATE INDEX analyses_of_lab ON analyses (lab_id, created_at DESC)`,
  // Spots are kept packed, a row per chunk of frames: 10^7 spots are a few hundred rows.
  `CREATE TABLE spot_chunks (
    analysis_id uuid NOT NULL REFERENCES analyses,
    chunk integer NOT NULL,
    first_frame integer NOT NULL,
    frames integer NOT NULL,
    spot_count integer NOT NULL,
    spots_per_frame integer[] NOT NULL,
    spots bytea NOT NULL,
    PRIMARY KEY (analysis_id, chunk)
  )`,
  `CREATE TABLE tracks (
    analysis_id uuid NOT NULL REFERENCES analyses,
    number integer NOT NULL,
    born_revision integer NOT NULL DEFAULT 0,
    ended_revision integer,
    first_frame integer NOT NULL,
    last_frame integer NOT NULL,
    points integer NOT NULL,
    bridged integer NOT NULL,
    -- Code of tracking/types POPULATIONS; null until the flow has been measured.
    population smallint,
    p_trapped real,
    mean_speed_m_s real,
    mean_x_px real NOT NULL,
    mean_y_px real NOT NULL,
    mean_brightness real NOT NULL,
    flags smallint NOT NULL,
    PRIMARY KEY (analysis_id, number, born_revision)
  )`,
  // A track's points, packed by blocks of 64 frames, so that a window of frames is one range of the key.
  `CREATE TABLE track_points (
    analysis_id uuid NOT NULL REFERENCES analyses,
    block integer NOT NULL,
    number integer NOT NULL,
    born_revision integer NOT NULL DEFAULT 0,
    ended_revision integer,
    first_frame integer NOT NULL,
    points bytea NOT NULL,
    PRIMARY KEY (analysis_id, block, number, born_revision)
  )`,
  `CREATE TABLE analysis_measures (
    analysis_id uuid NOT NULL REFERENCES analyses,
    tracks_revision integer NOT NULL,
    populations jsonb NOT NULL,
    pdfs jsonb NOT NULL,
    estimates jsonb NOT NULL,
    computed_at timestamptz NOT NULL DEFAULT now(),
    PRIMARY KEY (analysis_id, tracks_revision)
  )`,
  `CREATE TABLE candidates (
    id uuid PRIMARY KEY,
    lab_id uuid NOT NULL REFERENCES labs,
    analysis_id uuid NOT NULL REFERENCES analyses,
    event integer NOT NULL,
    track_a integer NOT NULL,
    track_b integer NOT NULL,
    t0_s double precision NOT NULL,
    p_chance double precision,
    q_value double precision,
    accepted boolean NOT NULL,
    -- The whole of tracking/pairs/candidate.ts, for the page and the table.
    facts jsonb NOT NULL,
    revision integer NOT NULL DEFAULT 1,
    created_at timestamptz NOT NULL DEFAULT now(),
    updated_at timestamptz NOT NULL DEFAULT now(),
    UNIQUE (analysis_id, event)
  )`,
];
