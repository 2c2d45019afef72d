-- The newest brief of a pair-day from the end of an index: without it every revision of the day is read, each time it is looked for.
CREATE INDEX brief_newest ON brief (site_id, local_date, wing_key, sheet_id, issued_at, revision);
DROP INDEX brief_by_date;

UPDATE meta SET value = '50' WHERE key = 'schema';
