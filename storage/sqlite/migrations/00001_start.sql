-- The tables of schema 1. Never edit this file once it is on main: add another.
--
-- Every key starts with the team, an integer, and every foreign key carries it,
-- so that no row can point into another team. team_link is where a team is
-- looked up by its outside name. Times are UTC seconds since 1970, days are
-- planner.Day numbers, temperatures °C, amounts g/m².

-- +goose Up

CREATE TABLE team (
    id INTEGER PRIMARY KEY AUTOINCREMENT
) STRICT;

CREATE TABLE team_link (
    platform   TEXT NOT NULL,
    outside_id TEXT NOT NULL,
    team       INTEGER NOT NULL REFERENCES team (id),
    PRIMARY KEY (platform, outside_id)
) STRICT, WITHOUT ROWID;

-- The last number given, by kind: ids are never given twice.
CREATE TABLE counter (
    team INTEGER NOT NULL REFERENCES team (id),
    kind TEXT    NOT NULL,
    last INTEGER NOT NULL,
    PRIMARY KEY (team, kind)
) STRICT, WITHOUT ROWID;

CREATE TABLE change (
    team    INTEGER NOT NULL REFERENCES team (id),
    id      INTEGER NOT NULL,
    at      INTEGER NOT NULL,
    who     TEXT    NOT NULL,
    command TEXT    NOT NULL,
    kind    TEXT    NOT NULL,
    thing   INTEGER NOT NULL,
    before  TEXT,
    after   TEXT,
    undoes  INTEGER,
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, undoes) REFERENCES change (team, id)
) STRICT, WITHOUT ROWID;

CREATE INDEX change_kind ON change (team, kind, id);

-- Set-up -------------------------------------------------------------------

CREATE TABLE site (
    team     INTEGER NOT NULL REFERENCES team (id),
    id       INTEGER NOT NULL,
    name     TEXT    NOT NULL,
    name_key TEXT    NOT NULL,
    lat      REAL    NOT NULL,
    lon      REAL    NOT NULL,
    zone     TEXT    NOT NULL,
    units    TEXT    NOT NULL,
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX site_name ON site (team, name_key) WHERE archived = 0;

-- Settings that move figures are rows valid from a day, in the order added
-- (step). They are never updated.
CREATE TABLE site_rule (
    team           INTEGER NOT NULL,
    site           INTEGER NOT NULL,
    step           INTEGER NOT NULL,
    valid_from     INTEGER NOT NULL,
    change         INTEGER NOT NULL,
    offset_seconds INTEGER NOT NULL,
    boundary       TEXT    NOT NULL,
    closing_hour   INTEGER NOT NULL,
    first_slot     INTEGER NOT NULL,
    PRIMARY KEY (team, site, step),
    FOREIGN KEY (team, site) REFERENCES site (team, id),
    FOREIGN KEY (team, change) REFERENCES change (team, id)
) STRICT, WITHOUT ROWID;

-- revision is a number of the team's "revision" counter, taken anew whenever
-- the station's record may have changed: no two records share one.
CREATE TABLE station (
    team     INTEGER NOT NULL,
    id       INTEGER NOT NULL,
    site     INTEGER NOT NULL,
    name     TEXT    NOT NULL,
    name_key TEXT    NOT NULL,
    rank     INTEGER NOT NULL,
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    revision INTEGER NOT NULL DEFAULT 0,
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX station_name ON station (team, site, name_key) WHERE archived = 0;

CREATE TABLE surface (
    team     INTEGER NOT NULL,
    id       INTEGER NOT NULL,
    site     INTEGER NOT NULL,
    name     TEXT    NOT NULL,
    name_key TEXT    NOT NULL,
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX surface_name ON surface (team, site, name_key) WHERE archived = 0;

CREATE TABLE surface_turf (
    team         INTEGER NOT NULL,
    surface      INTEGER NOT NULL,
    step         INTEGER NOT NULL,
    valid_from   INTEGER NOT NULL,
    change       INTEGER NOT NULL,
    grass        TEXT    NOT NULL,
    optimum_c    REAL    NOT NULL,
    width_c      REAL    NOT NULL,
    held_above   INTEGER NOT NULL CHECK (held_above IN (0, 1)),
    ceiling_g_m2 REAL    NOT NULL,
    PRIMARY KEY (team, surface, step),
    FOREIGN KEY (team, surface) REFERENCES surface (team, id),
    FOREIGN KEY (team, change) REFERENCES change (team, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE work (
    team     INTEGER NOT NULL,
    id       INTEGER NOT NULL,
    surface  INTEGER NOT NULL,
    name     TEXT    NOT NULL,
    name_key TEXT    NOT NULL,
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, surface) REFERENCES surface (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX work_name ON work (team, surface, name_key) WHERE archived = 0;

CREATE TABLE work_setting (
    team       INTEGER NOT NULL,
    work       INTEGER NOT NULL,
    step       INTEGER NOT NULL,
    valid_from INTEGER NOT NULL,
    change     INTEGER NOT NULL,
    counts     TEXT    NOT NULL,
    method     TEXT    NOT NULL,
    lower_c    REAL    NOT NULL,
    upper_c    REAL    NOT NULL,
    cutoff     TEXT    NOT NULL,
    target     REAL    NOT NULL,
    basis      TEXT    NOT NULL,
    latest     REAL    NOT NULL,
    PRIMARY KEY (team, work, step),
    FOREIGN KEY (team, work) REFERENCES work (team, id),
    FOREIGN KEY (team, change) REFERENCES change (team, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE total (
    team     INTEGER NOT NULL,
    id       INTEGER NOT NULL,
    site     INTEGER NOT NULL,
    name     TEXT    NOT NULL,
    name_key TEXT    NOT NULL,
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX total_name ON total (team, site, name_key) WHERE archived = 0;

CREATE TABLE total_setting (
    team        INTEGER NOT NULL,
    total       INTEGER NOT NULL,
    step        INTEGER NOT NULL,
    valid_from  INTEGER NOT NULL,
    change      INTEGER NOT NULL,
    counts      TEXT    NOT NULL,
    method      TEXT    NOT NULL,
    lower_c     REAL    NOT NULL,
    upper_c     REAL    NOT NULL,
    cutoff      TEXT    NOT NULL,
    optimum_c   REAL    NOT NULL,
    width_c     REAL    NOT NULL,
    held_above  INTEGER NOT NULL CHECK (held_above IN (0, 1)),
    start_month INTEGER NOT NULL,
    start_day   INTEGER NOT NULL,
    PRIMARY KEY (team, total, step),
    FOREIGN KEY (team, total) REFERENCES total (team, id),
    FOREIGN KEY (team, change) REFERENCES change (team, id)
) STRICT, WITHOUT ROWID;

-- Work log -----------------------------------------------------------------

CREATE TABLE entry (
    team   INTEGER NOT NULL,
    id     INTEGER NOT NULL,
    site   INTEGER NOT NULL,
    day    INTEGER NOT NULL,
    who    TEXT    NOT NULL,
    at     INTEGER NOT NULL,
    note   TEXT    NOT NULL,
    undone INTEGER NOT NULL CHECK (undone IN (0, 1)),
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

CREATE INDEX entry_day ON entry (team, site, day, id);

CREATE TABLE entry_pass (
    team          INTEGER NOT NULL,
    entry         INTEGER NOT NULL,
    place         INTEGER NOT NULL,
    work          INTEGER NOT NULL,
    nitrogen_g_m2 REAL    NOT NULL,
    PRIMARY KEY (team, entry, place),
    UNIQUE (team, entry, work),
    FOREIGN KEY (team, entry) REFERENCES entry (team, id),
    FOREIGN KEY (team, work) REFERENCES work (team, id)
) STRICT, WITHOUT ROWID;

-- Weather ------------------------------------------------------------------

CREATE TABLE import (
    team      INTEGER NOT NULL,
    id        INTEGER NOT NULL,
    station   INTEGER NOT NULL,
    change    INTEGER NOT NULL,
    file_name TEXT    NOT NULL,
    sha256    TEXT    NOT NULL,
    units     TEXT    NOT NULL,
    clock     TEXT    NOT NULL,
    format    TEXT    NOT NULL,
    at        INTEGER NOT NULL,
    who       TEXT    NOT NULL,
    rows      INTEGER NOT NULL,
    new       INTEGER NOT NULL,
    changed   INTEGER NOT NULL,
    same      INTEGER NOT NULL,
    empty     INTEGER NOT NULL,
    refused   INTEGER NOT NULL,
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    FOREIGN KEY (team, change) REFERENCES change (team, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE reading (
    team    INTEGER NOT NULL,
    station INTEGER NOT NULL,
    at      INTEGER NOT NULL,
    c       REAL    NOT NULL,
    import  INTEGER NOT NULL,
    PRIMARY KEY (team, station, at),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE daily (
    team    INTEGER NOT NULL,
    station INTEGER NOT NULL,
    day     INTEGER NOT NULL,
    high_c  REAL    NOT NULL,
    low_c   REAL    NOT NULL,
    mean_c  REAL,
    import  INTEGER NOT NULL,
    PRIMARY KEY (team, station, day),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

-- A value that an import (replaced_by) replaced, and the import it came with.
CREATE TABLE replaced_reading (
    team        INTEGER NOT NULL,
    station     INTEGER NOT NULL,
    at          INTEGER NOT NULL,
    replaced_by INTEGER NOT NULL,
    c           REAL    NOT NULL,
    import      INTEGER NOT NULL,
    PRIMARY KEY (team, station, at, replaced_by),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    FOREIGN KEY (team, replaced_by) REFERENCES import (team, id),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE replaced_daily (
    team        INTEGER NOT NULL,
    station     INTEGER NOT NULL,
    day         INTEGER NOT NULL,
    replaced_by INTEGER NOT NULL,
    high_c      REAL    NOT NULL,
    low_c       REAL    NOT NULL,
    mean_c      REAL,
    import      INTEGER NOT NULL,
    PRIMARY KEY (team, station, day, replaced_by),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    FOREIGN KEY (team, replaced_by) REFERENCES import (team, id),
    FOREIGN KEY (team, import) REFERENCES import (team, id)
) STRICT, WITHOUT ROWID;

-- planner.DayFacts, a row for each day of which anything is known. What is not
-- known is NULL. hours_c holds the hourly values as little-endian float64.
CREATE TABLE day_fact (
    team          INTEGER NOT NULL,
    station       INTEGER NOT NULL,
    day           INTEGER NOT NULL,
    high_c        REAL,
    low_c         REAL,
    extremes_from INTEGER NOT NULL,
    hourly_c      REAL,
    published     INTEGER NOT NULL CHECK (published IN (0, 1)),
    slots_real    INTEGER NOT NULL,
    slots_bridged INTEGER NOT NULL,
    slots_wanted  INTEGER NOT NULL,
    hours_c       BLOB,
    doubt         TEXT    NOT NULL,
    PRIMARY KEY (team, station, day),
    FOREIGN KEY (team, station) REFERENCES station (team, id),
    CHECK ((high_c IS NULL) = (low_c IS NULL))
) STRICT, WITHOUT ROWID;

-- Days ahead typed by hand, in the order typed (seq). Rows are added only.
CREATE TABLE hand_ahead (
    team    INTEGER NOT NULL,
    site    INTEGER NOT NULL,
    day     INTEGER NOT NULL,
    issued  INTEGER NOT NULL,
    seq     INTEGER NOT NULL,
    change  INTEGER NOT NULL,
    high_c  REAL,
    low_c   REAL,
    cleared INTEGER NOT NULL CHECK (cleared IN (0, 1)),
    PRIMARY KEY (team, site, day, issued, seq),
    FOREIGN KEY (team, site) REFERENCES site (team, id),
    FOREIGN KEY (team, change) REFERENCES change (team, id),
    CHECK (cleared = 1 OR (high_c IS NOT NULL AND low_c IS NOT NULL))
) STRICT, WITHOUT ROWID;

-- What stands, stands: a slip in the program must not rewrite it.

-- +goose StatementBegin
CREATE TRIGGER site_rule_stands BEFORE UPDATE ON site_rule
BEGIN SELECT raise(ABORT, 'a day rule is never updated'); END;
-- +goose StatementEnd
-- +goose StatementBegin
CREATE TRIGGER surface_turf_stands BEFORE UPDATE ON surface_turf
BEGIN SELECT raise(ABORT, 'a grass is never updated'); END;
-- +goose StatementEnd
-- +goose StatementBegin
CREATE TRIGGER work_setting_stands BEFORE UPDATE ON work_setting
BEGIN SELECT raise(ABORT, 'a work setting is never updated'); END;
-- +goose StatementEnd
-- +goose StatementBegin
CREATE TRIGGER total_setting_stands BEFORE UPDATE ON total_setting
BEGIN SELECT raise(ABORT, 'a total setting is never updated'); END;
-- +goose StatementEnd
-- +goose StatementBegin
CREATE TRIGGER change_stands BEFORE UPDATE ON change
BEGIN SELECT raise(ABORT, 'the change log is never updated'); END;
-- +goose StatementEnd
