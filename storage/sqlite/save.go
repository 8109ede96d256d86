package sqlite

import (
	"context"
	"database/sql"
	"fmt"
	"strings"

	sqlite3 "modernc.org/sqlite/lib"

	"swardbook/planner"
)

// Save checks and keeps a noun and its row of the change log in one
// transaction, and returns the noun as it is kept, with its id. A noun with id
// 0 is added; any other must be the team's (else NotFound) and is replaced.
//
// A name in use under the same parent, ignoring case and taking a space for a
// hyphen, is a Taken problem; a parent that is not there or is archived a
// NotFound problem. A noun stays under its parent, and its settings are added
// to, never changed or removed (Invalid). Then nothing is kept.
//
// A day rule that is added, or another zone, builds the day facts of the
// site's stations again, in the same transaction.
func (t *Team) Save(ctx context.Context, stamp planner.Stamp, noun planner.Noun) (planner.Noun, error) {
	switch noun := noun.(type) {
	case planner.Site:
		return save(ctx, t, stamp, sites{}, noun)
	case planner.Station:
		return save(ctx, t, stamp, stations{}, noun)
	case planner.Surface:
		return save(ctx, t, stamp, surfaces{}, noun)
	case planner.Work:
		return save(ctx, t, stamp, works{}, noun)
	case planner.Total:
		return save(ctx, t, stamp, totals{}, noun)
	case planner.Closed:
		return save(ctx, t, stamp, closedDays{}, noun)
	case planner.Entry:
		return save(ctx, t, stamp, entries{}, noun)
	case planner.Post:
		return save(ctx, t, stamp, posts{}, noun)
	case planner.People:
		return save(ctx, t, stamp, peopleBound{}, noun)
	case planner.Channel:
		return save(ctx, t, stamp, channels{}, noun)
	}
	return nil, planner.Problemf(planner.Internal, "a %T is nothing that can be kept", noun)
}

// kept says how one kind of noun is kept.
type kept[N planner.Noun] interface {
	// list returns the team's nouns that fulfil the condition on their table, by
	// id.
	list(ctx context.Context, on session, team int64, where string, args ...any) ([]N, error)
	// withID returns the noun with the id, in the form in which it is kept.
	withID(noun N, id int64) N
	// write keeps the noun, or refuses what cannot stand beside what is kept;
	// before is the zero noun for a new one.
	write(ctx context.Context, s saving, before, after N) error
}

// saving is one Save under way.
type saving struct {
	on     *sql.Conn
	team   int64
	change int64 // its row of the change log
}

func save[N planner.Noun](ctx context.Context, t *Team, stamp planner.Stamp, kind kept[N], noun N) (planner.Noun, error) {
	if err := noun.Check(); err != nil {
		return nil, err
	}
	var after N
	err := t.db.write(ctx, "save "+noun.Kind(), func(conn *sql.Conn) (err error) {
		after, err = saveOn(ctx, conn, t.id, stamp, kind, noun)
		return err
	})
	if err != nil {
		return nil, err
	}
	return after, nil
}

// saveOn keeps a checked noun and its row of the change log within a
// transaction.
func saveOn[N planner.Noun](ctx context.Context, on *sql.Conn, team int64, stamp planner.Stamp, kind kept[N], noun N) (after N, err error) {
	var before N
	id := noun.Key()
	row := logged{kind: noun.Kind()}
	if id == 0 {
		id, err = next(ctx, on, team, noun.Kind())
	} else {
		before, err = one(ctx, on, team, kind, id)
		row.before = before
	}
	if err != nil {
		return after, err
	}
	after = kind.withID(noun, id)
	row.thing, row.after = id, after
	change, err := log(ctx, on, team, stamp, row)
	if err != nil {
		return after, err
	}
	return after, kind.write(ctx, saving{on: on, team: team, change: change}, before, after)
}

// one returns the team's noun with the id, or a NotFound problem.
func one[N planner.Noun](ctx context.Context, on session, team int64, kind kept[N], id int64) (noun N, err error) {
	found, err := kind.list(ctx, on, team, "id = ?", id)
	if err == nil && len(found) == 0 {
		err = notFound(noun.Kind(), id)
	}
	if err != nil {
		return noun, err
	}
	return found[0], nil
}

// column is one column of a noun's row and its value.
type column struct {
	name  string
	value any
}

// put adds the row of the table or replaces its columns.
func (s saving) put(ctx context.Context, table string, id int64, columns ...column) error {
	names, marks, sets := []string{"team", "id"}, "?, ?", []string{}
	args := []any{s.team, id}
	for _, c := range columns {
		names = append(names, c.name)
		marks += ", ?"
		sets = append(sets, c.name+" = excluded."+c.name)
		args = append(args, c.value)
	}
	_, err := s.on.ExecContext(ctx, fmt.Sprintf(`INSERT INTO %s (%s) VALUES (%s) ON CONFLICT (team, id) DO UPDATE SET %s`,
		table, strings.Join(names, ", "), marks, strings.Join(sets, ", ")), args...)
	return err
}

// named is what all kinds that people name have in common. The table is named
// after the kind, and the column of the parent after the parent's kind.
type named struct {
	noun     planner.Noun
	name     string
	archived bool
	parent   string // its kind; "" for a site
	was, is  int64  // the parent's id before and after; was is 0 for a new noun
}

// putNamed keeps the row of a noun under its parent.
func (s saving) putNamed(ctx context.Context, n named, more ...column) error {
	columns := append([]column{{"name", n.name}, {"name_key", planner.NameKey(n.name)}, {"archived", n.archived}}, more...)
	if n.parent != "" {
		if n.was != 0 && n.was != n.is {
			return planner.Problemf(planner.Invalid, "%s cannot move to another %s", n.name, n.parent).
				WithHint("Drop it and add one there.")
		}
		if err := s.parentIsOpen(ctx, n.parent, n.is); err != nil {
			return err
		}
		columns = append(columns, column{n.parent, n.is})
	}
	err := s.put(ctx, n.noun.Kind(), n.noun.Key(), columns...)
	if code(err) == sqlite3.SQLITE_CONSTRAINT_UNIQUE {
		return s.taken(ctx, n, err)
	}
	return err
}

// taken is the problem of a name in use.
func (s saving) taken(ctx context.Context, n named, cause error) error {
	of := ""
	if n.parent != "" {
		var parentName string
		query := fmt.Sprintf(`SELECT name FROM %s WHERE team = ? AND id = ?`, n.parent)
		if err := s.on.QueryRowContext(ctx, query, s.team, n.is).Scan(&parentName); err != nil {
			return err
		}
		of = " of " + parentName
	}
	kind := n.noun.Kind()
	if kind == (planner.Closed{}).Kind() {
		kind = "closed day"
	}
	return planner.Problemf(planner.Taken, "%s is already a %s%s", n.name, kind, of).
		WithHint("Choose another name, or rename the other one first.").WithCause(cause)
}

// parentIsOpen is a NotFound problem unless the team has the site, or the
// surface, and neither it nor what it is under is archived.
func (s saving) parentIsOpen(ctx context.Context, kind string, id int64) error {
	query := `SELECT 1 FROM site WHERE team = ? AND id = ? AND archived = 0`
	if kind == (planner.Surface{}).Kind() {
		query = `SELECT 1 FROM surface JOIN site ON site.team = surface.team AND site.id = surface.site
			WHERE surface.team = ? AND surface.id = ? AND surface.archived = 0 AND site.archived = 0`
	}
	return mustExist(ctx, s.on, kind, id, query, s.team, id)
}
