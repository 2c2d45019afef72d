-- Finding what subscribers have been told lately, and which briefs are new, without reading all that is kept.

CREATE INDEX outbox_by_due ON outbox (due_at);
CREATE INDEX brief_by_issue ON brief (issued_at);
