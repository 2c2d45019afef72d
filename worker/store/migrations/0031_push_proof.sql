-- A browser shows by the echo of a nonce that it asked to be told: when it is to be sent one next. A browser that has
-- changed its address is found by the old one. From here on each migration writes its own number as the schema.

ALTER TABLE channel ADD COLUMN ask_at INTEGER;

CREATE INDEX channel_to_ask ON channel (ask_at) WHERE ask_at IS NOT NULL;
CREATE INDEX channel_unverified ON channel (subscription_id) WHERE state = 'unverified';
CREATE INDEX channel_of_browser ON channel (target ->> 'endpoint') WHERE kind = 'push';

-- Briefs of a wing with somebody's own figures go when that somebody goes.
CREATE INDEX brief_of_own_wing ON brief (wing_key) WHERE wing_key >= 'own-' AND wing_key < 'own.';

UPDATE channel SET ask_at = stored_at WHERE kind = 'push' AND state = 'unverified';

UPDATE meta SET value = '31' WHERE key = 'schema';
