-- What the bot in a chat server keeps: posts and what became of them, who is
-- crew and lead, which channel is about which site, lines too long for a
-- button, teams that took the bot out.

-- +goose Up

CREATE TABLE post (
    team           INTEGER NOT NULL,
    id             INTEGER NOT NULL,
    site           INTEGER NOT NULL,
    what           TEXT    NOT NULL,
    minute         INTEGER NOT NULL,
    weekdays       INTEGER NOT NULL,
    channel        TEXT    NOT NULL,
    window_minutes INTEGER NOT NULL,
    from_day       INTEGER NOT NULL,
    trouble        TEXT    NOT NULL,
    archived       INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

-- The ledger: at most one row for a post, a day and a part.
CREATE TABLE posting (
    team    INTEGER NOT NULL,
    post    INTEGER NOT NULL,
    day     INTEGER NOT NULL,
    part    INTEGER NOT NULL,
    state   TEXT    NOT NULL CHECK (state IN ('claimed', 'sent', 'given-up')),
    at      INTEGER NOT NULL,
    message TEXT    NOT NULL,
    reason  TEXT    NOT NULL,
    partial INTEGER NOT NULL CHECK (partial IN (0, 1)),
    figures TEXT    NOT NULL DEFAULT '',
    PRIMARY KEY (team, post, day, part),
    FOREIGN KEY (team, post) REFERENCES post (team, id)
) STRICT, WITHOUT ROWID;

CREATE INDEX posting_claimed ON posting (team, state) WHERE state = 'claimed';

CREATE TABLE people (
    team     INTEGER NOT NULL REFERENCES team (id),
    id       INTEGER NOT NULL,
    outside  TEXT    NOT NULL,
    role     TEXT    NOT NULL,
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX people_outside ON people (team, outside) WHERE archived = 0;

CREATE TABLE channel (
    team     INTEGER NOT NULL,
    id       INTEGER NOT NULL,
    site     INTEGER NOT NULL,
    outside  TEXT    NOT NULL,
    archived INTEGER NOT NULL CHECK (archived IN (0, 1)),
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

CREATE UNIQUE INDEX channel_outside ON channel (team, outside) WHERE archived = 0;

-- Command lines that are too long for a button.
CREATE TABLE line (
    team INTEGER NOT NULL REFERENCES team (id),
    id   INTEGER NOT NULL,
    line TEXT    NOT NULL,
    at   INTEGER NOT NULL,
    PRIMARY KEY (team, id),
    UNIQUE (team, line)
) STRICT, WITHOUT ROWID;

-- Teams whose server took the bot out, and when: they are erased after a grace.
CREATE TABLE team_left (
    team INTEGER PRIMARY KEY REFERENCES team (id),
    at   INTEGER NOT NULL
) STRICT;

-- What the program itself keeps from one run to the next; of no team.
CREATE TABLE program_note (
    name TEXT PRIMARY KEY,
    note TEXT NOT NULL
) STRICT, WITHOUT ROWID;
