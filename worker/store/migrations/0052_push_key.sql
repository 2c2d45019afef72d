-- Under which of our keys a browser signed up: a push service takes no other for it, also after we have a new one.
ALTER TABLE channel ADD COLUMN push_key TEXT;

UPDATE meta SET value = '52' WHERE key = 'schema';
