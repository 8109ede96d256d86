package sqlite

import (
	"cmp"
	"context"
	"database/sql"
	"math"
	"slices"

	"swardbook/planner"
)

// keptDays reads what is kept of the station's days in the blocks first to
// last: contiguous from the first to the last day of which anything is known, the
// days between without facts as an empty DayFacts. A block that cannot be read is
// a Refused problem.
func keptDays(ctx context.Context, on session, team int64, station planner.StationID, first, last int64) ([]planner.DayFacts, error) {
	const chosen = ` FROM day_block WHERE team = ?1 AND station = ?2 AND block BETWEEN ?3 AND ?4`
	rows, err := on.QueryContext(ctx, `SELECT block, facts, (SELECT count(*)`+chosen+`)`+chosen+` ORDER BY block`, team, station, first, last)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var days []planner.DayFacts
	for rows.Next() {
		var block, blocks int64
		var packed sql.RawBytes
		if err := rows.Scan(&block, &packed, &blocks); err != nil {
			return nil, err
		}
		if days == nil {
			days = make([]planner.DayFacts, 0, blocks*blockDays)
		}
		if days, err = unpackDays(days, block, packed); err != nil {
			return nil, damaged(block, err)
		}
	}
	return days, rows.Err()
}

// everyBlock is all blocks, those that no day can be in too.
func everyBlock() (first, last int64) { return math.MinInt64, math.MaxInt64 }

// damaged is the problem of a block that cannot be read.
func damaged(block int64, cause error) *planner.Problem {
	first := planner.Day(min(max(block, blockOf(planner.DayMin)), blockOf(planner.DayMax)) * blockDays)
	return planner.Problemf(planner.Refused, "the file of the store is damaged: the days from %s on cannot be read", first).
		WithHint("Put the newest copy of the file in its place. Without one: swardbook export still writes the station's " +
			"readings to a file, and import reads that into a new station.").WithCause(cause)
}

// of cuts the days that the span holds out of days in order.
func (s span) of(days []planner.DayFacts) []planner.DayFacts {
	at := func(day planner.Day) int {
		i, _ := slices.BinarySearchFunc(days, day, func(f planner.DayFacts, day planner.Day) int { return cmp.Compare(f.Day, day) })
		return i
	}
	return days[at(s.first):at(s.last+1)]
}

// dayWriter writes a station's day facts in blocks, of which none is kept.
type dayWriter struct {
	on      session
	team    int64
	station planner.StationID
	days    []planner.DayFacts // of one block, not written yet
}

// add takes days, each after all before it. One of which nothing is known takes
// no place.
func (w *dayWriter) add(ctx context.Context, days ...planner.DayFacts) error {
	for _, facts := range days {
		if blank(facts) {
			continue
		}
		if len(w.days) > 0 && blockOf(facts.Day) != blockOf(w.days[0].Day) {
			if err := w.flush(ctx); err != nil {
				return err
			}
		}
		w.days = append(w.days, facts)
	}
	return nil
}

// flush writes the days that are left.
func (w *dayWriter) flush(ctx context.Context) error {
	if len(w.days) == 0 {
		return nil
	}
	_, err := w.on.ExecContext(ctx, `INSERT INTO day_block (team, station, block, facts) VALUES (?, ?, ?, ?)`,
		w.team, w.station, blockOf(w.days[0].Day), packDays(w.days))
	w.days = w.days[:0]
	return err
}
