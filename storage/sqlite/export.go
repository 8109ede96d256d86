package sqlite

import (
	"bytes"
	"context"
	"database/sql"
	"encoding/csv"
	"encoding/hex"
	"fmt"
	"strconv"
	"strings"
	"time"

	"swardbook/planner"
)

// Export returns all that is kept of the site as comma-separated files, one a
// kind of row, days as dates and times in UTC. Kinds with no rows are left
// out. A site that is not the team's is a NotFound problem.
func (t *Team) Export(ctx context.Context, site planner.SiteID) (files []planner.DataFile, err error) {
	err = t.db.read(ctx, "export a site", func(conn *sql.Conn) error {
		err := mustExist(ctx, conn, "site", int64(site), `SELECT 1 FROM site WHERE team = ? AND id = ?`, t.id, site)
		if err != nil {
			return err
		}
		keys, err := foreignKeys(ctx, conn)
		if err != nil {
			return err
		}
		below := hanging(keys, "site")
		changes := ""
		for _, table := range below {
			where, name := below.condition(keys, table), table
			var content []byte
			if table == "day_block" {
				name = "day_fact"
				content, err = daysAsCSV(ctx, conn, t.id, site, where)
			} else {
				content, err = asCSV(ctx, conn, fmt.Sprintf(`SELECT * FROM %q WHERE %s`, table, where), t.id, site)
			}
			if err != nil {
				return fmt.Errorf("%s: %w", table, err)
			}
			if content != nil {
				files = append(files, planner.DataFile{Name: name + ".csv", Content: content})
			}
			if keyOf(keys, table) != "" {
				changes += fmt.Sprintf(` OR kind = '%s' AND thing IN (SELECT id FROM %q WHERE %s)`, table, table, where)
			}
		}
		content, err := asCSV(ctx, conn, `SELECT * FROM change WHERE team = ?1 AND (kind = '`+kindAhead+`' AND thing = ?2`+changes+`)`, t.id, site)
		if content != nil {
			files = append(files, planner.DataFile{Name: "change.csv", Content: content})
		}
		return err
	})
	return files, err
}

// asCSV runs the query and writes its rows with a header; nil when there are
// none. The team's number is left out: it means nothing outside.
func asCSV(ctx context.Context, on session, query string, args ...any) ([]byte, error) {
	rows, err := on.QueryContext(ctx, query, args...)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	columns, err := rows.Columns()
	if err != nil {
		return nil, err
	}
	var out bytes.Buffer
	writer := csv.NewWriter(&out)
	count := 0
	values, targets := make([]any, len(columns)), make([]any, len(columns))
	for i := range values {
		targets[i] = &values[i]
	}
	for ; rows.Next(); count++ {
		if err := rows.Scan(targets...); err != nil {
			return nil, err
		}
		if count == 0 {
			_ = writer.Write(columns[1:]) // the buffer takes all
		}
		row := make([]string, 0, len(columns))
		for i := 1; i < len(columns); i++ {
			row = append(row, exported(columns[i], values[i]))
		}
		_ = writer.Write(row)
	}
	writer.Flush()
	if err := rows.Err(); err != nil || count == 0 {
		return nil, err
	}
	return out.Bytes(), writer.Error()
}

// dayFactColumns are the columns of exported day facts. hours_c are the hourly
// values with spaces between.
var dayFactColumns = []string{"station", "day", "high_c", "low_c", "extremes_from", "hourly_c", "published",
	"slots_real", "slots_bridged", "slots_wanted", "hours_c", "doubt"}

// daysAsCSV writes the days of the blocks that the condition holds for, a row
// each with a header; nil when there are none.
func daysAsCSV(ctx context.Context, on session, team int64, site planner.SiteID, where string) ([]byte, error) {
	stations, err := collect(ctx, on, func(rows *sql.Rows) (station planner.StationID, err error) {
		return station, rows.Scan(&station)
	}, `SELECT DISTINCT station FROM day_block WHERE `+where+` ORDER BY station`, team, site)
	if err != nil || len(stations) == 0 {
		return nil, err
	}
	var out bytes.Buffer
	writer := csv.NewWriter(&out)
	_ = writer.Write(dayFactColumns) // the buffer takes all
	for _, station := range stations {
		first, last := everyBlock()
		days, err := keptDays(ctx, on, team, station, first, last)
		if err != nil {
			return nil, err
		}
		for _, facts := range days {
			if !blank(facts) {
				_ = writer.Write(exportedDay(station, facts))
			}
		}
	}
	writer.Flush()
	return out.Bytes(), writer.Error()
}

// exportedDay is a row of dayFactColumns.
func exportedDay(station planner.StationID, f planner.DayFacts) []string {
	var highC, lowC, meanC any
	if f.HasExtremes {
		highC, lowC = f.HighC, f.LowC
	}
	if f.HasHourly {
		meanC = f.HourlyC
	}
	published := int64(0)
	if f.Published {
		published = 1
	}
	hoursC := make([]string, 0, len(f.HoursC))
	for _, c := range f.HoursC {
		hoursC = append(hoursC, exported("", c))
	}
	values := []any{int64(station), int64(f.Day), highC, lowC, int64(f.ExtremesFrom), meanC, published,
		int64(f.SlotsReal), int64(f.SlotsBridged), int64(f.SlotsWanted), strings.Join(hoursC, " "), f.Doubt}
	row := make([]string, 0, len(values))
	for i, value := range values {
		row = append(row, exported(dayFactColumns[i], value))
	}
	return row
}

// dayColumns hold planner.Day numbers.
var dayColumns = map[string]bool{"day": true, "valid_from": true, "from_day": true, "to_day": true, "issued": true, "watered": true, "as_of": true, "start_day": true}

func exported(column string, value any) string {
	switch v := value.(type) {
	case nil:
		return ""
	case int64:
		switch {
		case dayColumns[column] && v >= int64(planner.DayMin) && v <= int64(planner.DayMax) && (v != 0 || column != "watered"):
			if v == int64(planner.DayMin) {
				return "" // since ever
			}
			return planner.Day(v).String()
		case column == "at":
			return time.Unix(v, 0).UTC().Format(time.RFC3339)
		}
		return strconv.FormatInt(v, 10)
	case float64:
		return strconv.FormatFloat(v, 'g', -1, 64)
	case []byte:
		return hex.EncodeToString(v)
	case string:
		return v
	}
	return fmt.Sprint(value)
}
