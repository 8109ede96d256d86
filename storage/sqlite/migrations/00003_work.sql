-- What a work may and may not do, closed days, parts of a surface, marks of a
-- season total, and what an entry says beyond day and work.

-- +goose Up

ALTER TABLE surface ADD COLUMN area_m2 REAL NOT NULL DEFAULT 0;
ALTER TABLE surface_turf ADD COLUMN budget_g_m2 REAL NOT NULL DEFAULT 0;

CREATE TABLE surface_part (
    team    INTEGER NOT NULL,
    surface INTEGER NOT NULL,
    place   INTEGER NOT NULL,
    part    INTEGER NOT NULL,
    name    TEXT    NOT NULL,
    share   REAL    NOT NULL,
    dropped INTEGER NOT NULL CHECK (dropped IN (0, 1)),
    PRIMARY KEY (team, surface, place),
    UNIQUE (team, surface, part),
    FOREIGN KEY (team, surface) REFERENCES surface (team, id)
) STRICT, WITHOUT ROWID;

ALTER TABLE work_setting ADD COLUMN least_days INTEGER NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN most_times INTEGER NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN most_total REAL NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN season_from_month INTEGER NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN season_from_day INTEGER NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN season_to_month INTEGER NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN season_to_day INTEGER NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN resting INTEGER NOT NULL DEFAULT 0 CHECK (resting IN (0, 1));
ALTER TABLE work_setting ADD COLUMN starts_empty INTEGER NOT NULL DEFAULT 0 CHECK (starts_empty IN (0, 1));
ALTER TABLE work_setting ADD COLUMN watered_in INTEGER NOT NULL DEFAULT 0 CHECK (watered_in IN (0, 1));
ALTER TABLE work_setting ADD COLUMN rain_free_hours REAL NOT NULL DEFAULT 0;
ALTER TABLE work_setting ADD COLUMN origin_source TEXT NOT NULL DEFAULT '';
ALTER TABLE work_setting ADD COLUMN origin_ingredient TEXT NOT NULL DEFAULT '';
ALTER TABLE work_setting ADD COLUMN origin_grass TEXT NOT NULL DEFAULT '';
ALTER TABLE work_setting ADD COLUMN origin_height_mm REAL NOT NULL DEFAULT 0;

CREATE TABLE total_mark (
    team  INTEGER NOT NULL,
    total INTEGER NOT NULL,
    place INTEGER NOT NULL,
    name  TEXT    NOT NULL,
    at    REAL    NOT NULL,
    PRIMARY KEY (team, total, place),
    FOREIGN KEY (team, total) REFERENCES total (team, id)
) STRICT, WITHOUT ROWID;

ALTER TABLE entry ADD COLUMN result TEXT NOT NULL DEFAULT '';
ALTER TABLE entry ADD COLUMN clock TEXT NOT NULL DEFAULT '';
ALTER TABLE entry ADD COLUMN watered INTEGER NOT NULL DEFAULT 0;

ALTER TABLE entry_pass ADD COLUMN rate_kind TEXT NOT NULL DEFAULT '';
ALTER TABLE entry_pass ADD COLUMN rate_value REAL NOT NULL DEFAULT 0;
ALTER TABLE entry_pass ADD COLUMN n_percent REAL NOT NULL DEFAULT 0;
ALTER TABLE entry_pass ADD COLUMN part INTEGER NOT NULL DEFAULT 0;
ALTER TABLE entry_pass ADD COLUMN slow_share REAL NOT NULL DEFAULT 0;
ALTER TABLE entry_pass ADD COLUMN slow_weeks REAL NOT NULL DEFAULT 0;

CREATE TABLE closed (
    team     INTEGER NOT NULL,
    id       INTEGER NOT NULL,
    site     INTEGER NOT NULL,
    name     TEXT    NOT NULL,
    name_key TEXT    NOT NULL,
    from_day INTEGER NOT NULL,
    to_day   INTEGER NOT NULL,
    yearly   INTEGER NOT NULL CHECK (yearly IN (0, 1)),
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX closed_name ON closed (team, site, name_key) WHERE archived = 0;

-- The works that are closed; none means all.
CREATE TABLE closed_work (
    team   INTEGER NOT NULL,
    closed INTEGER NOT NULL,
    place  INTEGER NOT NULL,
    work   INTEGER NOT NULL,
    PRIMARY KEY (team, closed, place),
    FOREIGN KEY (team, closed) REFERENCES closed (team, id),
    FOREIGN KEY (team, work) REFERENCES work (team, id)
) STRICT, WITHOUT ROWID;

-- What else may be typed for a day ahead; NULL when it was not.
ALTER TABLE hand_ahead ADD COLUMN humidity_percent REAL;
ALTER TABLE hand_ahead ADD COLUMN rain_mm REAL;
ALTER TABLE hand_ahead ADD COLUMN wind_ms REAL;
