package sqlite

import (
	"context"
	"database/sql"
	"fmt"
	"slices"
	"strings"

	"swardbook/planner"
)

// weatherTable is one of the tables of weather. Its temporary twin is
// temp.staged_NAME, and values that are replaced go to replaced_NAME.
type weatherTable struct {
	name   string
	key    string   // beside team and station
	values []string // the columns that are the value
	perDay int64    // how much the key grows in a day
	// facts says that day facts stand on it. What they do not stand on rides
	// along with the readings of a file and is counted apart.
	facts bool
}

var weatherTables = [...]weatherTable{
	{name: "reading", key: "at", values: []string{"c"}, perDay: secondsPerDay, facts: true},
	{name: "daily", key: "day", values: []string{"high_c", "low_c", "mean_c"}, perDay: 1, facts: true},
	{name: "rain", key: "at", values: []string{"mm"}, perDay: secondsPerDay},
}

// of lists the value columns of the row called alias.
func (t weatherTable) of(alias string) string {
	return alias + "." + strings.Join(t.values, ", "+alias+".")
}

// differ is the condition that two rows have different values. IS NOT, for a
// mean may be missing.
func (t weatherTable) differ(one, other string) string {
	return "((" + t.of(one) + ") IS NOT (" + t.of(other) + "))"
}

// expand writes the table's names into a statement.
func (t weatherTable) expand(statement string) string {
	// SQL divides towards zero; a key far below any makes the dividend positive.
	nextDay := fmt.Sprintf("((found + %[1]d * 200000) / %[1]d - 199999) * %[1]d", t.perDay)
	return strings.NewReplacer(
		"NAME", t.name, "KEY", t.key, "{values}", strings.Join(t.values, ", "),
		"{kept}", t.of("kept"), "{excluded}", t.of("excluded"),
		"{differs}", t.differ("kept", "staged"), "{differs from excluded}", t.differ("kept", "excluded"),
		"{next day}", nextDay).Replace(statement)
}

// staged counts the rows of one temporary table.
type staged struct {
	rows    int   // all
	kept    int   // those whose key is in the record
	changed int   // those of kept that have another value
	first   int64 // the least key; meaningless without rows
	last    int64
}

func (s staged) addTo(counts *planner.RowCounts) {
	counts.New += s.rows - s.kept
	counts.Changed += s.changed
	counts.Same += s.kept - s.changed
}

// count compares the staged rows with the record.
func (m *merge) count(ctx context.Context, t weatherTable) (staged, error) {
	var out staged
	var overlaps bool
	err := m.on.QueryRowContext(ctx, t.expand(`SELECT n, coalesce(first, 0), coalesce(last, 0),
		EXISTS (SELECT 1 FROM NAME WHERE team = ? AND station = ? AND KEY BETWEEN first AND last)
		FROM (SELECT count(*) AS n, min(KEY) AS first, max(KEY) AS last FROM temp.staged_NAME)`),
		m.team, m.station).Scan(&out.rows, &out.first, &out.last, &overlaps)
	if err != nil || !overlaps {
		return out, err
	}
	// CROSS JOIN: the staged rows are gone through and the record is looked up.
	err = m.on.QueryRowContext(ctx, t.expand(`SELECT count(*), coalesce(sum({differs}), 0) FROM temp.staged_NAME AS staged
		CROSS JOIN NAME AS kept ON kept.team = ? AND kept.station = ? AND kept.KEY = staged.KEY`),
		m.team, m.station).Scan(&out.kept, &out.changed)
	return out, err
}

// move keeps the values that are replaced and puts the staged ones in.
func (m *merge) move(ctx context.Context, t weatherTable, rows staged) error {
	if rows.rows == rows.kept && rows.changed == 0 {
		return nil
	}
	if rows.changed > 0 {
		_, err := m.on.ExecContext(ctx, t.expand(`INSERT INTO replaced_NAME (team, station, KEY, replaced_by, import, {values})
			SELECT kept.team, kept.station, kept.KEY, ?, kept.import, {kept} FROM temp.staged_NAME AS staged
			CROSS JOIN NAME AS kept ON kept.team = ? AND kept.station = ? AND kept.KEY = staged.KEY WHERE {differs}`),
			m.report.ImportID, m.team, m.station)
		if err != nil {
			return err
		}
	}
	// WHERE true tells SQLite that ON belongs to the conflict, not to a join.
	insert := `INSERT INTO NAME AS kept (team, station, KEY, import, {values})
		SELECT ?, ?, KEY, ?, {values} FROM temp.staged_NAME WHERE true ORDER BY KEY`
	if rows.kept > 0 {
		insert += ` ON CONFLICT (team, station, KEY) DO UPDATE
			SET (import, {values}) = (excluded.import, {excluded}) WHERE {differs from excluded}`
	}
	_, err := m.on.ExecContext(ctx, t.expand(insert), m.team, m.station, m.report.ImportID)
	return err
}

// touched returns the days that the rows of this import stand on, a reading's
// in UTC, in order. It leaps from day to day: a day's other rows are not read.
func (m *merge) touched(ctx context.Context, t weatherTable, rows staged) ([]planner.Day, error) {
	if rows.rows == rows.kept && rows.changed == 0 {
		return nil, nil
	}
	first := `SELECT KEY FROM NAME WHERE team = ?1 AND station = ?2 AND import = ?3 AND KEY BETWEEN `
	return collect(ctx, m.on, func(rows *sql.Rows) (planner.Day, error) {
		var key int64
		err := rows.Scan(&key)
		return planner.Day(floorDiv(key, t.perDay)), err
	}, t.expand(`WITH RECURSIVE touched (found) AS (
			SELECT (`+first+`?4 AND ?5 ORDER BY KEY LIMIT 1)
			UNION ALL
			SELECT (`+first+`{next day} AND ?5 ORDER BY KEY LIMIT 1) FROM touched WHERE found IS NOT NULL
		) SELECT found FROM touched WHERE found IS NOT NULL`),
		m.team, m.station, m.report.ImportID, rows.first, rows.last)
}

// spans widens the days by touchDays either side and joins those that meet.
func spans(days []planner.Day) []span {
	slices.Sort(days)
	var out []span
	for _, day := range days {
		next := span{day - touchDays, day + touchDays}
		if n := len(out); n > 0 && next.first <= out[n-1].last+1 {
			out[n-1].last = next.last
			continue
		}
		out = append(out, next)
	}
	return out
}
