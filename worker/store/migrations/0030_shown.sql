-- When a browser said that it showed a message: what a push service takes is not yet seen by anybody.

ALTER TABLE outbox ADD COLUMN shown_at INTEGER;
