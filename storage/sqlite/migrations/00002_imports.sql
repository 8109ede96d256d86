-- Imports can be withdrawn, and several stations of a site stand beside each
-- other.

-- +goose Up

-- The change that withdrew an import; NULL while it stands.
ALTER TABLE import ADD COLUMN withdrawn INTEGER;
-- What was said of the file and is taken for granted with the station's next.
ALTER TABLE import ADD COLUMN sensor TEXT NOT NULL DEFAULT '';
ALTER TABLE import ADD COLUMN dates TEXT NOT NULL DEFAULT '';

-- What an import said again: between two keys (times, or days of daily values)
-- every value that the record had when it was merged.
CREATE TABLE import_same (
    team      INTEGER NOT NULL,
    import    INTEGER NOT NULL,
    kind      TEXT    NOT NULL CHECK (kind IN ('reading', 'daily')),
    first_key INTEGER NOT NULL,
    last_key  INTEGER NOT NULL,
    PRIMARY KEY (team, import, kind, first_key),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

CREATE INDEX replaced_reading_by ON replaced_reading (team, replaced_by);
CREATE INDEX replaced_daily_by ON replaced_daily (team, replaced_by);
CREATE INDEX import_station ON import (team, station);
