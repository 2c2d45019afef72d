-- People who subscribe without an account: what they prefer, who has yet to say yes, and what keeps strangers out.
-- See ../SCHEMA.md. An `owner` is an address under a keyed hash: it tells the same address again and nothing else.

ALTER TABLE subscription ADD COLUMN owner TEXT;
ALTER TABLE subscription ADD COLUMN days INTEGER NOT NULL DEFAULT 127 CHECK (days BETWEEN 1 AND 127);
ALTER TABLE subscription ADD COLUMN speed_unit TEXT NOT NULL DEFAULT 'm/s' CHECK (speed_unit IN ('m/s', 'km/h', 'kt', 'mph'));
ALTER TABLE subscription ADD COLUMN height_unit TEXT NOT NULL DEFAULT 'm' CHECK (height_unit IN ('m', 'ft'));
ALTER TABLE subscription ADD COLUMN resume_at INTEGER;

CREATE UNIQUE INDEX subscription_of_owner ON subscription (owner) WHERE owner IS NOT NULL;

ALTER TABLE channel ADD COLUMN quiet_from INTEGER CHECK (quiet_from BETWEEN 0 AND 1439);
ALTER TABLE channel ADD COLUMN quiet_to INTEGER CHECK (quiet_to BETWEEN 0 AND 1439);

CREATE TABLE signup (
  owner TEXT PRIMARY KEY,
  id TEXT NOT NULL UNIQUE,
  address TEXT NOT NULL,
  body TEXT NOT NULL,
  mail_at INTEGER,
  lease_until INTEGER,
  mailed_at INTEGER,
  attempts INTEGER NOT NULL DEFAULT 0,
  expires_at INTEGER NOT NULL,
  stored_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE INDEX signup_to_mail ON signup (mail_at) WHERE mail_at IS NOT NULL;

CREATE TABLE token (
  hash TEXT PRIMARY KEY,
  purpose TEXT NOT NULL,
  subject TEXT NOT NULL,
  expires_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE suppression (
  owner TEXT PRIMARY KEY,
  reason TEXT NOT NULL,
  stored_at INTEGER NOT NULL
) STRICT, WITHOUT ROWID;

CREATE TABLE rate (
  key TEXT NOT NULL,
  since INTEGER NOT NULL,
  count INTEGER NOT NULL,
  PRIMARY KEY (key, since)
) STRICT, WITHOUT ROWID;

CREATE TABLE sheet_change (
  sheet_id TEXT NOT NULL,
  version INTEGER NOT NULL,
  against INTEGER,
  changes TEXT NOT NULL,
  loosens INTEGER NOT NULL CHECK (loosens IN (0, 1)),
  stored_at INTEGER NOT NULL,
  PRIMARY KEY (sheet_id, version)
) STRICT, WITHOUT ROWID;
