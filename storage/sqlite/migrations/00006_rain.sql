-- Rain that a station's gauge caught, what was said when it fell too soon after a
-- pass, and how much of a surface a part was.

-- +goose Up

CREATE TABLE rain (
    team    INTEGER NOT NULL,
    station INTEGER NOT NULL,
    at      INTEGER NOT NULL,
    mm      REAL    NOT NULL CHECK (mm >= 0),
    import  INTEGER NOT NULL,
    PRIMARY KEY (team, station, at),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE replaced_rain (
    team        INTEGER NOT NULL,
    station     INTEGER NOT NULL,
    at          INTEGER NOT NULL,
    replaced_by INTEGER NOT NULL,
    mm          REAL    NOT NULL CHECK (mm >= 0),
    import      INTEGER NOT NULL,
    PRIMARY KEY (team, station, at, replaced_by),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    FOREIGN KEY (team, replaced_by) REFERENCES import (team, id),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

CREATE INDEX replaced_rain_by ON replaced_rain (team, replaced_by);

-- import_same as before, with rain among its kinds.
CREATE TABLE import_same_too (
    team      INTEGER NOT NULL,
    import    INTEGER NOT NULL,
    kind      TEXT    NOT NULL CHECK (kind IN ('reading', 'daily', 'rain')),
    first_key INTEGER NOT NULL,
    last_key  INTEGER NOT NULL,
    PRIMARY KEY (team, import, kind, first_key),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

INSERT INTO import_same_too SELECT team, import, kind, first_key, last_key FROM import_same;
DROP TABLE import_same;
ALTER TABLE import_same_too RENAME TO import_same;

-- The share of the surface's area that a pass over a part went over, as it was
-- when it was logged; 0 when it was not said.
ALTER TABLE entry_pass ADD COLUMN share REAL NOT NULL DEFAULT 0;

-- Whoever logged it said that it counts although it rained.
ALTER TABLE entry ADD COLUMN rain_counts INTEGER NOT NULL DEFAULT 0 CHECK (rain_counts IN (0, 1));
