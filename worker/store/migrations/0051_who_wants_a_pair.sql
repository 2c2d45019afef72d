-- Who wants a brief for a site, wing and sheet: change notices are found from there.
CREATE INDEX subscription_site_by_pair ON subscription_site (site_id, wing_key, sheet_id);

UPDATE meta SET value = '51' WHERE key = 'schema';
