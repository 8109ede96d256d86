package sqlite

import (
	"context"
	"database/sql"
	"encoding/json"
	"fmt"
	"time"

	"swardbook/planner"
)

// The kinds of changes that are no noun's; their Before and After are nil.
const (
	kindImport = "import" // a station file merged; the thing is the import
	kindAhead  = "ahead"  // days ahead typed by hand; the thing is the site
)

// Changes returns the newest changes, newest first, at most limit (none when
// it is 0 or less); kind limits them to one kind of noun, or to "import" and
// "ahead", "" takes all. Imports and days ahead are in the log too, without a
// noun before and after.
func (t *Team) Changes(ctx context.Context, kind string, limit int) ([]planner.Change, error) {
	if limit <= 0 {
		return nil, nil
	}
	query, args := `SELECT id, at, who, command, kind, thing, before, after, coalesce(undoes, 0)
		FROM change WHERE team = ?`, []any{t.id}
	if kind != "" {
		query, args = query+` AND kind = ?`, append(args, kind)
	}
	changes, err := collect(ctx, t.db.reader, scanChange, query+` ORDER BY id DESC LIMIT ?`, append(args, limit)...)
	return changes, storeError(t.db.name, "read changes", err)
}

func scanChange(rows *sql.Rows) (planner.Change, error) {
	var change planner.Change
	var at int64
	var before, after sql.NullString
	err := rows.Scan(&change.ID, &at, &change.By, &change.Command, &change.Kind, &change.Thing, &before, &after, &change.Undoes)
	if err != nil {
		return change, err
	}
	change.At = time.Unix(at, 0).UTC()
	if change.Before, err = decodeNoun(change.Kind, before); err == nil {
		change.After, err = decodeNoun(change.Kind, after)
	}
	if err != nil {
		return change, fmt.Errorf("change %d: %w", change.ID, err)
	}
	return change, nil
}

// decodeNoun reads a noun of the kind; nil for none, and for what is no noun.
func decodeNoun(kind string, text sql.NullString) (planner.Noun, error) {
	if !text.Valid {
		return nil, nil
	}
	switch kind {
	case planner.Site{}.Kind():
		return decode[planner.Site](text.String)
	case planner.Station{}.Kind():
		return decode[planner.Station](text.String)
	case planner.Surface{}.Kind():
		return decode[planner.Surface](text.String)
	case planner.Work{}.Kind():
		return decode[planner.Work](text.String)
	case planner.Total{}.Kind():
		return decode[planner.Total](text.String)
	case planner.Closed{}.Kind():
		return decode[planner.Closed](text.String)
	case planner.Entry{}.Kind():
		return decode[planner.Entry](text.String)
	case planner.Post{}.Kind():
		return decode[planner.Post](text.String)
	case planner.People{}.Kind():
		return decode[planner.People](text.String)
	case planner.Channel{}.Kind():
		return decode[planner.Channel](text.String)
	case kindImport, kindAhead:
		return nil, nil
	}
	return nil, fmt.Errorf("a %q is nothing this program keeps", kind)
}

func decode[N planner.Noun](text string) (planner.Noun, error) {
	var noun N
	if err := json.Unmarshal([]byte(text), &noun); err != nil {
		return nil, fmt.Errorf("read a kept %s: %w", noun.Kind(), err)
	}
	return noun, nil
}

// encode writes what a change log row holds. A value that is no number, which
// no Check may have looked at because nothing reads it, is refused here.
func encode(thing any) (string, error) {
	text, err := json.Marshal(thing)
	if err != nil {
		return "", planner.Problemf(planner.Invalid, "a value cannot be kept: %v", err).WithCause(err)
	}
	return string(text), nil
}

// logged is a row of the change log to be.
type logged struct {
	kind          string
	thing         int64
	before, after any // nil for none
}

// log adds the row to the change log and returns its number.
func log(ctx context.Context, on session, team int64, stamp planner.Stamp, row logged) (id int64, err error) {
	var before, after, undoes any
	if row.before != nil {
		if before, err = encode(row.before); err != nil {
			return 0, err
		}
	}
	if row.after != nil {
		if after, err = encode(row.after); err != nil {
			return 0, err
		}
	}
	if stamp.Undoes != 0 {
		undoes = int64(stamp.Undoes)
		if err := mustExist(ctx, on, "change", int64(stamp.Undoes), `SELECT 1 FROM change WHERE team = ? AND id = ?`, team, stamp.Undoes); err != nil {
			return 0, err
		}
	}
	if id, err = next(ctx, on, team, changeCounter); err != nil {
		return 0, err
	}
	_, err = on.ExecContext(ctx, `INSERT INTO change (team, id, at, who, command, kind, thing, before, after, undoes)
		VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		team, id, stamp.At.Unix(), stamp.By, stamp.Command, row.kind, row.thing, before, after, undoes)
	return id, err
}

// mustExist is a NotFound problem unless the query gives a row.
func mustExist(ctx context.Context, on session, kind string, id int64, query string, args ...any) error {
	var one int
	err := on.QueryRowContext(ctx, query, args...).Scan(&one)
	if err == sql.ErrNoRows {
		return notFound(kind, id)
	}
	return err
}
