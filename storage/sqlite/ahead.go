package sqlite

import (
	"context"
	"database/sql"

	"swardbook/planner"
)

// SaveAhead keeps days ahead typed by hand, issued on the day; they replace
// earlier ones of the same days from the issue day on. Nothing is overwritten:
// what held on an earlier day is still told by Ahead. Of one day typed twice
// the later counts.
//
// No days at all is a Missing problem; a day before the issue day or a value
// that is no temperature an Invalid one; a site that the team does not have, or
// has archived, a NotFound one. Then nothing is kept.
func (t *Team) SaveAhead(ctx context.Context, stamp planner.Stamp, site planner.SiteID, issued planner.Day, days []planner.HandDay) error {
	if len(days) == 0 {
		return planner.Problemf(planner.Missing, "no day ahead was given").WithHint("Give a date with its high and low.")
	}
	for _, day := range days {
		if err := planner.CheckHandDay(issued, day); err != nil {
			return err
		}
	}
	return t.db.write(ctx, "save days ahead", func(conn *sql.Conn) error {
		s := saving{on: conn, team: t.id}
		if err := s.parentIsOpen(ctx, "site", int64(site)); err != nil {
			return err
		}
		change, err := log(ctx, conn, t.id, stamp, logged{kind: kindAhead, thing: int64(site), after: typedAhead{issued, plain(days)}})
		if err != nil {
			return err
		}
		for _, day := range days {
			if err := addHandDay(ctx, conn, t.id, change, site, issued, day); err != nil {
				return err
			}
		}
		return nil
	})
}

// typedAhead is what the change log keeps of days ahead.
type typedAhead struct {
	Issued planner.Day       `json:"issued"`
	Days   []planner.HandDay `json:"days"`
}

// plain takes the values, which nothing reads, out of cleared days.
func plain(days []planner.HandDay) []planner.HandDay {
	out := make([]planner.HandDay, len(days))
	for i, day := range days {
		if day.Cleared {
			day = planner.HandDay{Day: day.Day, Cleared: true}
		}
		out[i] = day
	}
	return out
}

func addHandDay(ctx context.Context, on session, team, change int64, site planner.SiteID, issued planner.Day, day planner.HandDay) error {
	seq, err := next(ctx, on, team, aheadCounter)
	if err != nil {
		return err
	}
	known := func(value planner.Optional) sql.NullFloat64 {
		return sql.NullFloat64{Float64: value.Value, Valid: value.Known && !day.Cleared}
	}
	_, err = on.ExecContext(ctx, `INSERT INTO hand_ahead (team, site, day, issued, seq, change, high_c, low_c, cleared,
		humidity_percent, rain_mm, wind_ms) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		team, site, day.Day, issued, seq, change, known(planner.Optional{Value: day.HighC, Known: true}),
		known(planner.Optional{Value: day.LowC, Known: true}), day.Cleared,
		known(day.HumidityPercent), known(day.RainMM), known(day.WindMS))
	return err
}

// Ahead returns the days typed by hand that hold on the day asOf: of each day
// from asOf on the newest typed on or before asOf, in order, cleared ones left
// out.
func (t *Team) Ahead(ctx context.Context, site planner.SiteID, asOf planner.Day) ([]planner.HandDay, error) {
	days, err := collect(ctx, t.db.reader, func(rows *sql.Rows) (day planner.HandDay, err error) {
		var humidity, rain, wind sql.NullFloat64
		err = rows.Scan(&day.Day, &day.HighC, &day.LowC, &humidity, &rain, &wind)
		day.HumidityPercent = planner.Optional{Value: humidity.Float64, Known: humidity.Valid}
		day.RainMM = planner.Optional{Value: rain.Float64, Known: rain.Valid}
		day.WindMS = planner.Optional{Value: wind.Float64, Known: wind.Valid}
		return day, err
	}, `SELECT day, high_c, low_c, humidity_percent, rain_mm, wind_ms FROM (
			SELECT *, row_number() OVER (PARTITION BY day ORDER BY issued DESC, seq DESC) AS newest
			FROM hand_ahead WHERE team = ?1 AND site = ?2 AND day >= ?3 AND issued <= ?3)
		WHERE newest = 1 AND cleared = 0 ORDER BY day`, t.id, site, asOf)
	return days, storeError(t.db.name, "read days ahead", err)
}
