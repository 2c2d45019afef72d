-- Training days, as they were asked for and as they were planned. Behind a link derived from id and link_version.

CREATE TABLE plan (
  id TEXT PRIMARY KEY,
  link_version INTEGER NOT NULL DEFAULT 1 CHECK (link_version > 0),
  revision INTEGER NOT NULL CHECK (revision > 0),
  local_date TEXT NOT NULL,
  request TEXT NOT NULL,
  body TEXT NOT NULL,
  stored_at INTEGER NOT NULL,
  expires_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE INDEX plan_by_date ON plan (local_date);
CREATE INDEX plan_by_expiry ON plan (expires_at);
