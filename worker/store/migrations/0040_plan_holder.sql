-- Whom to tell when a planned block turns: a subscription, whose own channels then carry the notice.

ALTER TABLE plan ADD COLUMN subscription_id TEXT;

CREATE INDEX plan_of_subscription ON plan (subscription_id) WHERE subscription_id IS NOT NULL;

UPDATE meta SET value = '40' WHERE key = 'schema';
