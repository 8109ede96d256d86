-- The days ahead as they were issued, and which sheet was issued on which.

-- +goose Up

-- One row for equal days ahead: the digest is of the path.
CREATE TABLE outlook (
    team      INTEGER NOT NULL,
    id        INTEGER NOT NULL,
    site      INTEGER NOT NULL,
    as_of     INTEGER NOT NULL,
    at        INTEGER NOT NULL,
    revision  INTEGER NOT NULL,
    sources   TEXT    NOT NULL,
    typed     INTEGER NOT NULL,
    years     INTEGER NOT NULL,
    seed      INTEGER NOT NULL,
    engine    INTEGER NOT NULL,
    start_day INTEGER NOT NULL,
    path      TEXT    NOT NULL,
    digest    BLOB    NOT NULL,
    PRIMARY KEY (team, id),
    UNIQUE (team, site, as_of, revision, engine, start_day, digest),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;

CREATE TABLE sheet_outlook (
    team    INTEGER NOT NULL,
    sheet   INTEGER NOT NULL,
    outlook INTEGER NOT NULL,
    PRIMARY KEY (team, sheet),
    FOREIGN KEY (team, sheet) REFERENCES sheet (team, id),
    FOREIGN KEY (team, outlook) REFERENCES outlook (team, id)
) STRICT, WITHOUT ROWID;
