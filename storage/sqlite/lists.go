package sqlite

import (
	"context"
	"database/sql"
	"fmt"
	"strings"
)

// list says where a plain list of a noun is kept: rows in their order (place),
// written anew with the noun. What was there stands in the change log.
type list[T any] struct {
	table   string
	parent  string // the column that holds the noun's id
	columns string // of an item, in the order of fields
	fields  func(*T) []any
}

// all returns the lists of every noun of the team, by the noun's id.
func (l list[T]) all(ctx context.Context, on session, team int64) (map[int64][]T, error) {
	byParent := map[int64][]T{}
	query := fmt.Sprintf(`SELECT %[1]s, %[2]s FROM %[3]s WHERE team = ? ORDER BY %[1]s, place`, l.parent, l.columns, l.table)
	_, err := collect(ctx, on, func(rows *sql.Rows) (struct{}, error) {
		var parent int64
		var item T
		err := rows.Scan(append([]any{&parent}, l.fields(&item)...)...)
		byParent[parent] = append(byParent[parent], item)
		return struct{}{}, err
	}, query, team)
	return byParent, err
}

// keep writes the noun's list.
func (l list[T]) keep(ctx context.Context, by saving, parent int64, items []T) error {
	query := fmt.Sprintf(`DELETE FROM %s WHERE team = ? AND %s = ?`, l.table, l.parent)
	if _, err := by.on.ExecContext(ctx, query, by.team, parent); err != nil {
		return err
	}
	query = fmt.Sprintf(`INSERT INTO %s (team, %s, place, %s) VALUES (?1, ?2, ?3%s)`,
		l.table, l.parent, l.columns, numbered(4, strings.Count(l.columns, ",")+1))
	for place, item := range items {
		if _, err := by.on.ExecContext(ctx, query, append([]any{by.team, parent, place}, l.fields(&item)...)...); err != nil {
			return err
		}
	}
	return nil
}
