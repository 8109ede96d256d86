-- Where a post was sent, or may have been, when its channel is changed while it
-- is under way; and who logged an entry when names change or are shared.

-- +goose Up

-- The channel that the row was claimed for; empty in older rows: the post's.
ALTER TABLE posting ADD COLUMN channel TEXT NOT NULL DEFAULT '';
-- Given up without knowing whether it went out.
ALTER TABLE posting ADD COLUMN unsure INTEGER NOT NULL DEFAULT 0 CHECK (unsure IN (0, 1));

-- Who logged it, by the id that never changes; empty in older entries, which go
-- by the name.
ALTER TABLE entry ADD COLUMN who_id TEXT NOT NULL DEFAULT '';
