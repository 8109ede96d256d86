package sqlite

import (
	"context"
	"database/sql"
	"fmt"
	"slices"
	"strings"

	"swardbook/planner"
)

// EraseTeam takes out every row of the team, whatever table it is in, and the
// team itself.
func (t *Team) EraseTeam(ctx context.Context) error {
	return t.db.write(ctx, "erase a team", func(conn *sql.Conn) error {
		if _, err := conn.ExecContext(ctx, "PRAGMA defer_foreign_keys = on"); err != nil {
			return err
		}
		tables, err := collect(ctx, conn, scanText, `SELECT m.name FROM sqlite_schema AS m, pragma_table_info(m.name) AS c
			WHERE m.type = 'table' AND c.name = 'team'`)
		if err != nil {
			return err
		}
		for _, table := range tables {
			if _, err := conn.ExecContext(ctx, fmt.Sprintf(`DELETE FROM %q WHERE team = ?`, table), t.id); err != nil {
				return err
			}
		}
		_, err = conn.ExecContext(ctx, `DELETE FROM team WHERE id = ?`, t.id)
		return err
	})
}

// EraseSite takes out the site and every row that hangs on it by a foreign
// key, and the rows of the change log about any of them. The team's kept lines
// go all: a line need not say which site it is about, and may hold a note of
// this one; buttons of other sites that stood for one are too old from then on.
// A site that is not the team's is a NotFound problem.
func (t *Team) EraseSite(ctx context.Context, site planner.SiteID) error {
	return t.db.write(ctx, "erase a site", func(conn *sql.Conn) error {
		err := mustExist(ctx, conn, "site", int64(site), `SELECT 1 FROM site WHERE team = ? AND id = ?`, t.id, site)
		if err != nil {
			return err
		}
		if _, err := conn.ExecContext(ctx, "PRAGMA defer_foreign_keys = on"); err != nil {
			return err
		}
		keys, err := foreignKeys(ctx, conn)
		if err != nil {
			return err
		}
		tree := hanging(keys, "site")
		// Children go first, while what they hang on can still be looked up;
		// their changes go before them for the same reason.
		for _, table := range slices.Backward(tree) {
			where := tree.condition(keys, table)
			for _, query := range []string{
				fmt.Sprintf(`DELETE FROM change WHERE team = ?1 AND kind = '%s' AND thing IN (SELECT %s FROM %q WHERE %s)`, table, keyOf(keys, table), table, where),
				fmt.Sprintf(`DELETE FROM %q WHERE %s`, table, where),
			} {
				if keyOf(keys, table) == "" && strings.HasPrefix(query, "DELETE FROM change") {
					continue
				}
				if _, err := conn.ExecContext(ctx, query, t.id, site); err != nil {
					return fmt.Errorf("%s: %w", table, err)
				}
			}
		}
		if _, err := conn.ExecContext(ctx, `DELETE FROM line WHERE team = ?`, t.id); err != nil {
			return err
		}
		_, err = conn.ExecContext(ctx, `DELETE FROM change WHERE team = ?1 AND kind = ?3 AND thing = ?2`, t.id, site, kindAhead)
		return err
	})
}

// foreignKey says that rows of the table hang on rows of the parent.
type foreignKey struct {
	table, column  string // column beside team
	parent, target string
	hasID          bool // the table has a column id
}

// foreignKeys reads the schema: all foreign keys of the form (team, column).
func foreignKeys(ctx context.Context, on session) ([]foreignKey, error) {
	return collect(ctx, on, func(rows *sql.Rows) (key foreignKey, err error) {
		return key, rows.Scan(&key.table, &key.column, &key.parent, &key.target, &key.hasID)
	}, `SELECT m.name, f."from", f."table", f."to",
			EXISTS (SELECT 1 FROM pragma_table_info(m.name) AS c WHERE c.name = 'id')
		FROM sqlite_schema AS m, pragma_foreign_key_list(m.name) AS f
		WHERE m.type = 'table' AND f."from" <> 'team' AND f."to" = 'id' AND f."table" <> m.name
		ORDER BY m.name, f.id`)
}

// keyOf is the table's own id column, "" when it has none.
func keyOf(keys []foreignKey, table string) string {
	for _, key := range keys {
		if key.parent == table || key.table == table && key.hasID {
			return "id"
		}
	}
	return ""
}

// tree is tables, each after all that it hangs on.
type tree []string

// hanging is the root and every table that hangs on it, directly or not.
func hanging(keys []foreignKey, root string) tree {
	below := tree{root}
	for grown := true; grown; {
		grown = false
		for _, key := range keys {
			if slices.Contains(below, key.parent) && !slices.Contains(below, key.table) {
				below, grown = append(below, key.table), true
			}
		}
	}
	// Order: a table comes once all its parents inside the tree have come.
	ordered := tree{}
	for len(ordered) < len(below) {
		before := len(ordered)
		for _, table := range below {
			ready := !slices.Contains(ordered, table)
			for _, key := range keys {
				if key.table == table && slices.Contains(below, key.parent) && !slices.Contains(ordered, key.parent) {
					ready = false
				}
			}
			if ready {
				ordered = append(ordered, table)
			}
		}
		if len(ordered) == before {
			break // tables that hang on each other; the schema has none
		}
	}
	return ordered
}

// condition says which rows of the table hang on the site ?2 of the team ?1.
func (t tree) condition(keys []foreignKey, table string) string {
	if table == t[0] {
		return "team = ?1 AND id = ?2"
	}
	var ways []string
	for _, key := range keys {
		if key.table == table && slices.Contains(t, key.parent) {
			ways = append(ways, fmt.Sprintf("%q IN (SELECT %q FROM %q WHERE %s)", key.column, key.target, key.parent, t.condition(keys, key.parent)))
		}
	}
	return "team = ?1 AND (" + strings.Join(ways, " OR ") + ")"
}
