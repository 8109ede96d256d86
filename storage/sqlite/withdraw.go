package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"slices"

	"swardbook/planner"
)

// errDry ends a transaction that was only to see what would be.
var errDry = errors.New("nothing is to be kept")

// Withdraw takes an import back, in one transaction: its values leave the
// record, the values that they replaced come back with the import that they
// came with, and a value that a later import gave too stays, as that import's.
// The day facts of the days that this touches are built again. With dry all is
// taken back again and the report says what would be.
//
// An import that the team does not have, or that is withdrawn already, is a
// NotFound problem.
func (t *Team) Withdraw(ctx context.Context, stamp planner.Stamp, id planner.ImportID, dry bool) (planner.Withdrawal, error) {
	var w withdrawing
	err := t.db.write(ctx, "withdraw an import", func(conn *sql.Conn) error {
		w = withdrawing{on: conn, team: t.id, id: id}
		if err := w.run(ctx, stamp); err != nil {
			return err
		}
		if dry {
			return errDry
		}
		return nil
	})
	if errors.Is(err, errDry) {
		err = nil
	}
	return w.report, err
}

// withdrawing is one import on its way out.
type withdrawing struct {
	on     *sql.Conn
	team   int64
	id     planner.ImportID
	report planner.Withdrawal
}

func (w *withdrawing) run(ctx context.Context, stamp planner.Stamp) error {
	found, err := collect(ctx, w.on, scanImport, `SELECT `+importColumns+` FROM import WHERE team = ? AND id = ? AND withdrawn IS NULL`, w.team, w.id)
	if err != nil {
		return err
	}
	if len(found) == 0 {
		return notFound("import", int64(w.id))
	}
	w.report = planner.Withdrawal{Import: found[0]}
	station, err := one(ctx, w.on, w.team, stations{}, int64(found[0].Station))
	if err != nil {
		return err
	}
	site, err := one(ctx, w.on, w.team, sites{}, int64(station.Site))
	if err != nil {
		return err
	}
	cutter, err := newCutter(w.on, w.team, station.ID, site)
	if err != nil {
		return err
	}
	if err := w.mark(ctx, stamp); err != nil {
		return err
	}
	var touched []planner.Day
	for _, table := range weatherTables {
		told := w.report
		days, err := w.take(ctx, table)
		if err != nil {
			return err
		}
		if !table.facts {
			w.report = told // it goes along with the readings
			continue
		}
		touched = append(touched, days...)
	}
	if len(touched) == 0 {
		return nil
	}
	if err := w.rebuild(ctx, cutter, touched); err != nil {
		return err
	}
	return bumpRevision(ctx, w.on, w.team, station.ID)
}

// mark logs the withdrawal and marks the import.
func (w *withdrawing) mark(ctx context.Context, stamp planner.Stamp) error {
	var merged int64
	if err := w.on.QueryRowContext(ctx, `SELECT change FROM import WHERE team = ? AND id = ?`, w.team, w.id).Scan(&merged); err != nil {
		return err
	}
	stamp.Undoes = planner.ChangeID(merged)
	change, err := log(ctx, w.on, w.team, stamp, logged{kind: kindImport, thing: int64(w.id)})
	if err != nil {
		return err
	}
	_, err = w.on.ExecContext(ctx, `UPDATE import SET withdrawn = ? WHERE team = ? AND id = ?`, change, w.team, w.id)
	return err
}

// heir is the earliest import that stands and said a value of the withdrawn one
// again: of those after it, and before the one that replaced the value.
const heir = `(SELECT min(same.import) FROM import_same AS same JOIN import ON import.team = same.team AND import.id = same.import
	WHERE same.team = ?1 AND same.kind = 'NAME' AND same.import > ?2 AND same.import < {until} AND import.station = ?3
	AND import.withdrawn IS NULL AND own.KEY BETWEEN same.first_key AND same.last_key)`

// noEnd stands for no import: one that is after all others.
const noEnd = `9223372036854775807`

// take takes the import's values out of one table and returns the days, a
// reading's in UTC, that this touches.
//
// A value of the import either stands in the record, or a later import replaced
// it and it is kept as replaced. Either way it passes to its heir, if it has one;
// else the value that it replaced takes its place, if there is one; else it
// goes.
func (w *withdrawing) take(ctx context.Context, t weatherTable) ([]planner.Day, error) {
	step := func(statement string) (int, error) {
		result, err := w.on.ExecContext(ctx, t.expand(statement), w.team, w.id, w.report.Import.Station)
		if err != nil {
			return 0, fmt.Errorf("take back %s: %w", t.name, err)
		}
		n, err := result.RowsAffected()
		return int(n), err
	}
	// What passes on, first of all: the values, then what they had replaced.
	for _, statement := range []string{
		`CREATE TEMP TABLE IF NOT EXISTS passing_NAME (KEY INTEGER NOT NULL UNIQUE, heir INTEGER NOT NULL) STRICT`,
		`DELETE FROM temp.passing_NAME`,
	} {
		if _, err := w.on.ExecContext(ctx, t.expand(statement)); err != nil {
			return nil, err
		}
	}
	for _, statement := range []string{
		`INSERT INTO temp.passing_NAME (KEY, heir) SELECT KEY, heir FROM (SELECT own.KEY, ` + until(heir, noEnd) + ` AS heir
			FROM NAME AS own WHERE own.team = ?1 AND own.station = ?3 AND own.import = ?2) WHERE heir IS NOT NULL`,
		`INSERT INTO temp.passing_NAME (KEY, heir) SELECT KEY, heir FROM (SELECT own.KEY, ` + until(heir, "own.replaced_by") + ` AS heir
			FROM replaced_NAME AS own WHERE own.team = ?1 AND own.station = ?3 AND own.import = ?2) WHERE heir IS NOT NULL`,
	} {
		if _, err := step(statement); err != nil {
			return nil, err
		}
	}
	const passes = `KEY IN (SELECT KEY FROM temp.passing_NAME)`
	const toHeir = `(SELECT heir FROM temp.passing_NAME AS p WHERE p.KEY = `
	kept, err := step(`UPDATE NAME SET import = ` + toHeir + `NAME.KEY) WHERE team = ?1 AND station = ?3 AND import = ?2 AND ` + passes)
	if err != nil {
		return nil, err
	}
	w.report.Kept += kept
	for _, statement := range []string{
		`UPDATE replaced_NAME SET import = ` + toHeir + `replaced_NAME.KEY) WHERE team = ?1 AND station = ?3 AND import = ?2 AND ` + passes,
		`UPDATE replaced_NAME SET replaced_by = ` + toHeir + `replaced_NAME.KEY) WHERE team = ?1 AND station = ?3 AND replaced_by = ?2 AND ` + passes,
	} {
		if _, err := step(statement); err != nil {
			return nil, err
		}
	}
	days, err := w.touched(ctx, t)
	if err != nil {
		return nil, err
	}
	return days, w.drop(t, step)
}

// drop gives the place of each value of the import to the one it replaced, or
// to none.
func (w *withdrawing) drop(t weatherTable, step func(string) (int, error)) error {
	const replacedOne = `(SELECT {from} FROM replaced_NAME AS old WHERE old.team = ?1 AND old.station = ?3 AND old.KEY = {this}.KEY AND old.replaced_by = ?2)`
	of := func(table string) string {
		return ` SET (import, {values}) = ` + replaced(replacedOne, "old.import, "+t.of("old"), table) + `
			WHERE team = ?1 AND station = ?3 AND import = ?2 AND EXISTS ` + replaced(replacedOne, "1", table)
	}
	restored, err := step(`UPDATE NAME` + of("NAME"))
	if err != nil {
		return err
	}
	gone, err := step(`DELETE FROM NAME WHERE team = ?1 AND station = ?3 AND import = ?2`)
	if err != nil {
		return err
	}
	w.report.Restored, w.report.Gone = w.report.Restored+restored, w.report.Gone+gone
	for _, statement := range []string{
		`UPDATE replaced_NAME` + of("replaced_NAME"),
		`DELETE FROM replaced_NAME WHERE team = ?1 AND station = ?3 AND import = ?2`,
		`DELETE FROM replaced_NAME WHERE team = ?1 AND station = ?3 AND replaced_by = ?2`,
	} {
		if _, err := step(statement); err != nil {
			return err
		}
	}
	return nil
}

// touched returns the days of the values that stand in the record and go.
func (w *withdrawing) touched(ctx context.Context, t weatherTable) ([]planner.Day, error) {
	var days []planner.Day
	_, err := collect(ctx, w.on, func(rows *sql.Rows) (struct{}, error) {
		var key int64
		err := rows.Scan(&key)
		if day := planner.Day(floorDiv(key, t.perDay)); len(days) == 0 || days[len(days)-1] != day {
			days = append(days, day)
		}
		return struct{}{}, err
	}, t.expand(`SELECT KEY FROM NAME WHERE team = ? AND station = ? AND import = ? ORDER BY KEY`), w.team, w.report.Import.Station, w.id)
	return days, err
}

// rebuild builds the facts of the days again and keeps which moved.
func (w *withdrawing) rebuild(ctx context.Context, c *cutter, touched []planner.Day) error {
	slices.Sort(touched)
	for _, days := range spans(touched) {
		before, err := factsOf(ctx, w.on, w.team, c.station, days)
		if err != nil {
			return err
		}
		if err := c.rebuild(ctx, days); err != nil {
			return err
		}
		after, err := factsOf(ctx, w.on, w.team, c.station, days)
		if err != nil {
			return err
		}
		for day := days.first; day <= days.last; day++ {
			moved := planner.MovedDay{Before: withDay(before[day], day), After: withDay(after[day], day)}
			if planner.Moved(moved.Before, moved.After) {
				w.report.Moved = append(w.report.Moved, moved)
			}
		}
	}
	return nil
}

func withDay(facts planner.DayFacts, day planner.Day) planner.DayFacts {
	facts.Day = day
	return facts
}

// factsOf reads the kept facts of the days, by day.
func factsOf(ctx context.Context, on session, team int64, station planner.StationID, days span) (map[planner.Day]planner.DayFacts, error) {
	known, err := keptDays(ctx, on, team, station, blockOf(days.first), blockOf(days.last))
	byDay := map[planner.Day]planner.DayFacts{}
	for _, facts := range days.of(known) {
		byDay[facts.Day] = facts
	}
	return byDay, err
}
