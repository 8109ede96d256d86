package sqlite

import (
	"context"
	"database/sql"
	"encoding/binary"
	"errors"
	"fmt"
	"math"

	"github.com/pressly/goose/v3"

	"swardbook/planner"
)

// daysIntoBlocks is migration 7: day facts, until then a row of day_fact each,
// are packed into blocks of 64 days. It is written in Go because SQL cannot pack.
func daysIntoBlocks() *goose.Migration {
	return goose.NewGoMigration(7, &goose.GoFunc{RunTx: func(ctx context.Context, tx *sql.Tx) error {
		if _, err := tx.ExecContext(ctx, `
			-- planner.DayFacts of the days 64 × block to 64 × block + 63, see packDays.
			CREATE TABLE day_block (
				team    INTEGER NOT NULL,
				station INTEGER NOT NULL,
				block   INTEGER NOT NULL,
				facts   BLOB    NOT NULL,
				PRIMARY KEY (team, station, block),
				FOREIGN KEY (team, station) REFERENCES station (team, id)
			) STRICT`); err != nil {
			return err
		}
		if err := packFactRows(ctx, tx); err != nil {
			return err
		}
		_, err := tx.ExecContext(ctx, `DROP TABLE day_fact`)
		return err
	}}, nil)
}

// packFactRows writes the rows of day_fact as blocks. A row that cannot be read
// is a Refused problem.
func packFactRows(ctx context.Context, on session) error {
	rows, err := on.QueryContext(ctx, `SELECT team, station, day, high_c, low_c, extremes_from, hourly_c, published,
		slots_real, slots_bridged, slots_wanted, hours_c, doubt FROM day_fact ORDER BY team, station, day`)
	if err != nil {
		return err
	}
	defer rows.Close()
	out := dayWriter{on: on}
	for rows.Next() {
		var row factRow
		if err := row.scan(rows); err != nil {
			return err
		}
		facts, err := row.facts()
		if err != nil {
			return damaged(floorDiv(row.day.Int64, blockDays), fmt.Errorf("day %d: %w", row.day.Int64, err)).
				WithHint("Put the newest copy of the file in its place. Without one: the program of before still opens it " +
					"and exports the station's readings, which import reads into a new station.")
		}
		if row.team != out.team || row.station != out.station {
			if err := out.flush(ctx); err != nil {
				return err
			}
			out.team, out.station = row.team, row.station
		}
		if err := out.add(ctx, facts); err != nil {
			return err
		}
	}
	if err := rows.Err(); err != nil {
		return err
	}
	return out.flush(ctx)
}

// factRow is a row of day_fact as it was stored; what is not known is NULL.
type factRow struct {
	team               int64
	station            planner.StationID
	day                sql.NullInt64
	highC, lowC, meanC sql.NullFloat64
	extremesFrom       sql.NullInt64
	published          sql.NullBool
	real, bridged      sql.NullInt64
	wanted             sql.NullInt64
	hoursC             sql.RawBytes // little-endian float64
	doubt              sql.NullString
}

func (r *factRow) scan(rows *sql.Rows) error {
	return rows.Scan(&r.team, &r.station, &r.day, &r.highC, &r.lowC, &r.extremesFrom, &r.meanC, &r.published,
		&r.real, &r.bridged, &r.wanted, &r.hoursC, &r.doubt)
}

// facts reads the row; what cannot be is an error.
func (r *factRow) facts() (planner.DayFacts, error) {
	day, from := planner.Day(r.day.Int64), planner.Source(r.extremesFrom.Int64)
	switch {
	case int64(day) != r.day.Int64 || day < planner.DayMin || day > planner.DayMax:
		return planner.DayFacts{}, errors.New("it is outside the years 1700 to 2299")
	case int64(from) != r.extremesFrom.Int64 || from > planner.FromAhead:
		return planner.DayFacts{}, fmt.Errorf("source %d of its extremes is not known", r.extremesFrom.Int64)
	}
	hoursC, err := unpackHours(r.hoursC)
	if err != nil {
		return planner.DayFacts{}, err
	}
	if hoursC == nil && r.meanC.Valid && !r.published.Bool {
		return planner.DayFacts{}, errors.New("the hourly values of its 24-hour mean are missing")
	}
	return planner.DayFacts{
		Day: day, HasExtremes: r.highC.Valid, HighC: r.highC.Float64, LowC: r.lowC.Float64, ExtremesFrom: from,
		HasHourly: r.meanC.Valid, HourlyC: r.meanC.Float64, Published: r.published.Bool,
		SlotsReal: int(r.real.Int64), SlotsBridged: int(r.bridged.Int64), SlotsWanted: int(r.wanted.Int64),
		HoursC: hoursC, Doubt: r.doubt.String,
	}, nil
}

// unpackHours reads hours_c. A length that is not whole values, and a value
// that is no temperature, are errors.
func unpackHours(packed []byte) ([]float64, error) {
	if packed == nil {
		return nil, nil
	}
	if len(packed)%8 != 0 || len(packed) == 0 {
		return nil, fmt.Errorf("hourly values of %d bytes cannot be read", len(packed))
	}
	hoursC := make([]float64, len(packed)/8)
	for i := range hoursC {
		hoursC[i] = math.Float64frombits(binary.LittleEndian.Uint64(packed[8*i:]))
		if err := planner.CheckTemperature(hoursC[i]); err != nil {
			return nil, fmt.Errorf("hourly value %d: %w", i, err)
		}
	}
	return hoursC, nil
}
