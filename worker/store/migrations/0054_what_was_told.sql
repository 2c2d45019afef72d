-- What a subscriber was told of late, and the last number of a day, without all that is kept of a fortnight.
CREATE INDEX outbox_of_day ON outbox (subscription_id, due_local_date, seq);

UPDATE meta SET value = '54' WHERE key = 'schema';
