-- What can be done now stands first in an index: looked for among all that is wanted, a morning grew with the square of its
-- sites. A brief waits until the moment by which it is sent as it is, and is brought forward when the last
-- assessment that it waits for has ended.

DROP INDEX run_wanted;
CREATE INDEX run_wanted ON run (step, start_by) WHERE state = 'wanted';
CREATE INDEX run_wanted_of_site ON run (site_id, step, wing_key, sheet_id) WHERE state = 'wanted';
CREATE INDEX outbox_waiting ON outbox (subscription_id) WHERE state = 'pending' AND kind = 'brief' AND content IS NULL;

UPDATE outbox SET next_attempt_at = ready_by WHERE state = 'pending' AND kind = 'brief' AND content IS NULL AND attempts = 0;

UPDATE meta SET value = '53' WHERE key = 'schema';
