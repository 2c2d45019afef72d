-- Every table, key and lifetime is described in ../SCHEMA.md. Instants are whole milliseconds since 1970 UTC, local
-- dates are yyyy-mm-dd in the zone of the site or the subscriber. No triggers: they do not survive a remote migration.

CREATE TABLE meta (
  key TEXT PRIMARY KEY,
  value TEXT NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE site (
  id TEXT PRIMARY KEY,
  feature TEXT NOT NULL,
  demo INTEGER NOT NULL CHECK (demo IN (0, 1)),
  stored_at INTEGER NOT NULL,
  retired_at INTEGER
) STRICT, WITHOUT ROWID;

CREATE TABLE sheet (
  id TEXT NOT NULL,
  version INTEGER NOT NULL,
  body TEXT NOT NULL,
  stored_at INTEGER NOT NULL,
  PRIMARY KEY (id, version)
) STRICT, WITHOUT ROWID;

CREATE TABLE wing (
  key TEXT PRIMARY KEY,
  name TEXT NOT NULL,
  body TEXT NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE published (
  site_id TEXT NOT NULL,
  wing_key TEXT NOT NULL,
  sheet_id TEXT NOT NULL,
  PRIMARY KEY (site_id, wing_key, sheet_id)
) STRICT, WITHOUT ROWID;

CREATE TABLE source_ground (
  site_id TEXT NOT NULL,
  source TEXT NOT NULL,
  ground_m REAL NOT NULL,
  stored_at INTEGER NOT NULL,
  PRIMARY KEY (site_id, source)
) STRICT, WITHOUT ROWID;

CREATE TABLE forecast (
  source TEXT NOT NULL,
  site_id TEXT NOT NULL,
  run_at INTEGER NOT NULL,
  fetched_at INTEGER NOT NULL,
  body TEXT NOT NULL,
  PRIMARY KEY (source, site_id, run_at)
) STRICT, WITHOUT ROWID;

CREATE TABLE brief (
  site_id TEXT NOT NULL,
  local_date TEXT NOT NULL,
  wing_key TEXT NOT NULL,
  sheet_id TEXT NOT NULL,
  sheet_version INTEGER NOT NULL,
  revision INTEGER NOT NULL CHECK (revision > 0),
  verdict TEXT NOT NULL CHECK (verdict IN ('within', 'close', 'unknown', 'beyond')),
  demo INTEGER NOT NULL CHECK (demo IN (0, 1)),
  issued_at INTEGER NOT NULL,
  valid_until INTEGER NOT NULL,
  run_at INTEGER,
  input_hash TEXT NOT NULL,
  digest TEXT NOT NULL,
  body TEXT NOT NULL,
  PRIMARY KEY (site_id, local_date, wing_key, sheet_id, sheet_version, revision)
) STRICT;

CREATE INDEX brief_by_date ON brief (local_date, site_id);

CREATE TABLE subscription (
  id TEXT PRIMARY KEY,
  state TEXT NOT NULL CHECK (state IN ('active', 'paused', 'ended')),
  time_zone TEXT NOT NULL,
  deliver_minute INTEGER NOT NULL CHECK (deliver_minute BETWEEN 0 AND 1439),
  next_due_at INTEGER NOT NULL,
  link_version INTEGER NOT NULL DEFAULT 1,
  stored_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE INDEX subscription_due ON subscription (state, next_due_at);

CREATE TABLE subscription_site (
  subscription_id TEXT NOT NULL,
  site_id TEXT NOT NULL,
  wing_key TEXT NOT NULL,
  sheet_id TEXT NOT NULL,
  PRIMARY KEY (subscription_id, site_id, wing_key, sheet_id)
) STRICT, WITHOUT ROWID;

CREATE TABLE channel (
  id TEXT PRIMARY KEY,
  subscription_id TEXT NOT NULL,
  rank INTEGER NOT NULL,
  kind TEXT NOT NULL,
  target TEXT NOT NULL,
  state TEXT NOT NULL CHECK (state IN ('unverified', 'active', 'dead')),
  reason TEXT,
  secret_version INTEGER NOT NULL DEFAULT 1,
  oldest_secret_version INTEGER NOT NULL DEFAULT 1,
  reached_at INTEGER,
  stored_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE INDEX channel_of_subscription ON channel (subscription_id, state, rank);

CREATE TABLE outbox (
  id TEXT PRIMARY KEY,
  subscription_id TEXT NOT NULL,
  channel_id TEXT NOT NULL,
  due_local_date TEXT NOT NULL,
  kind TEXT NOT NULL,
  seq INTEGER NOT NULL,
  format INTEGER NOT NULL,
  due_at INTEGER NOT NULL,
  ready_by INTEGER NOT NULL,
  valid_until INTEGER NOT NULL,
  state TEXT NOT NULL CHECK (state IN ('pending', 'sent', 'expired', 'dead', 'suppressed')),
  reason TEXT,
  attempts INTEGER NOT NULL DEFAULT 0,
  next_attempt_at INTEGER NOT NULL,
  lease_until INTEGER,
  lease_by TEXT,
  content TEXT,
  created_at INTEGER NOT NULL,
  settled_at INTEGER,
  CHECK ((state = 'pending') = (settled_at IS NULL)),
  CHECK (state = 'pending' OR reason IS NOT NULL),
  UNIQUE (subscription_id, channel_id, due_local_date, kind, seq)
) STRICT;

CREATE INDEX outbox_pending ON outbox (next_attempt_at) WHERE state = 'pending';

CREATE TABLE run (
  key TEXT PRIMARY KEY,
  step TEXT NOT NULL CHECK (step IN ('tick', 'fetch', 'assess')),
  site_id TEXT,
  local_date TEXT,
  source TEXT,
  wing_key TEXT,
  sheet_id TEXT,
  due_at INTEGER NOT NULL,
  start_by INTEGER NOT NULL,
  state TEXT NOT NULL CHECK (state IN ('wanted', 'done', 'failed')),
  attempts INTEGER NOT NULL DEFAULT 0,
  next_attempt_at INTEGER NOT NULL,
  lease_until INTEGER,
  lease_by TEXT,
  outcome TEXT,
  finished_at INTEGER
) STRICT, WITHOUT ROWID;

CREATE INDEX run_wanted ON run (step, next_attempt_at) WHERE state = 'wanted';
CREATE INDEX run_of_site ON run (site_id, local_date, step);

CREATE TABLE breaker (
  source TEXT PRIMARY KEY,
  body TEXT NOT NULL,
  stored_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE source_cache (
  key TEXT PRIMARY KEY,
  body TEXT NOT NULL,
  stored_at INTEGER NOT NULL,
  expires_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE terminal (
  line INTEGER PRIMARY KEY AUTOINCREMENT,
  message_id TEXT NOT NULL UNIQUE,
  title TEXT NOT NULL,
  text TEXT NOT NULL,
  written_at INTEGER NOT NULL
) STRICT;

CREATE TABLE log (
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  at INTEGER NOT NULL,
  level TEXT NOT NULL CHECK (level IN ('info', 'warning', 'error')),
  step TEXT NOT NULL,
  event TEXT NOT NULL,
  detail TEXT
) STRICT;

CREATE INDEX log_by_time ON log (at);

INSERT INTO meta (key, value) VALUES ('schema', '1');
