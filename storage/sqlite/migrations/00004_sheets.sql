-- Sheets as they were issued.

-- +goose Up

CREATE TABLE sheet (
    team   INTEGER NOT NULL,
    id     INTEGER NOT NULL,
    site   INTEGER NOT NULL,
    form   INTEGER NOT NULL,
    as_of  INTEGER NOT NULL,
    issued INTEGER NOT NULL,
    issuer TEXT    NOT NULL,
    inputs TEXT    NOT NULL,
    engine INTEGER NOT NULL,
    PRIMARY KEY (team, id),
    FOREIGN KEY (team, site) REFERENCES site (team, id)
) STRICT, WITHOUT ROWID;
