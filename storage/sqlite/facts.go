package sqlite

import (
	"context"
	"database/sql"
	"math"
	"sort"
	"time"

	"swardbook/planner"
)

const (
	secondsPerDay = 24 * 60 * 60

	// daysAtOnce bounds how much of a record is in memory while its day facts
	// are built: 256 days of readings each minute are 6 MB.
	daysAtOnce = 256

	// touchDays is how many days either side of a reading's UTC day it can
	// matter to: a site's offset and closing hour move its day by at most two,
	// the days beside it included.
	touchDays = 2
)

// span is a run of days, both ends included; empty when last is before first.
type span struct{ first, last planner.Day }

// cutter builds a station's day facts from its readings.
type cutter struct {
	on      *sql.Conn
	team    int64
	station planner.StationID
	rules   planner.Dated[planner.DayRule]
	zone    *time.Location

	readings []planner.Reading // of the days at work, reused
}

func newCutter(on *sql.Conn, team int64, station planner.StationID, site planner.Site) (*cutter, error) {
	zone, err := site.Location()
	if err != nil {
		return nil, err
	}
	return &cutter{on: on, team: team, station: station, rules: site.Rules, zone: zone}, nil
}

// daysWithReadings returns the days that any reading of the station can touch.
func (c *cutter) daysWithReadings(ctx context.Context) (span, error) {
	var firstAt, lastAt, firstDay, lastDay sql.NullInt64
	err := c.on.QueryRowContext(ctx, `SELECT
		(SELECT min(at) FROM reading WHERE team = ?1 AND station = ?2), (SELECT max(at) FROM reading WHERE team = ?1 AND station = ?2),
		(SELECT min(day) FROM daily WHERE team = ?1 AND station = ?2), (SELECT max(day) FROM daily WHERE team = ?1 AND station = ?2)`,
		c.team, c.station).Scan(&firstAt, &lastAt, &firstDay, &lastDay)
	days := span{first: planner.DayMax, last: planner.DayMin}
	if firstAt.Valid {
		days = span{utcDay(firstAt.Int64) - touchDays, utcDay(lastAt.Int64) + touchDays}
	}
	if firstDay.Valid {
		days.first, days.last = min(days.first, planner.Day(firstDay.Int64)), max(days.last, planner.Day(lastDay.Int64))
	}
	return days, err
}

// utcDay is the day of an instant in UTC.
func utcDay(at int64) planner.Day { return planner.Day(floorDiv(at, secondsPerDay)) }

func floorDiv(a, b int64) int64 {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

// rebuild builds the facts of the days again, a few hundred at a time. What is
// kept of other days in their first and last block stays as it is.
func (c *cutter) rebuild(ctx context.Context, days span) error {
	days = span{max(days.first, planner.DayMin), min(days.last, planner.DayMax)}
	if days.last < days.first {
		return nil
	}
	first, last := blockOf(days.first), blockOf(days.last)
	before, err := keptDays(ctx, c.on, c.team, c.station, first, first)
	if err != nil {
		return err
	}
	after, err := keptDays(ctx, c.on, c.team, c.station, last, last)
	if err != nil {
		return err
	}
	if _, err := c.on.ExecContext(ctx, `DELETE FROM day_block WHERE team = ? AND station = ? AND block BETWEEN ? AND ?`,
		c.team, c.station, first, last); err != nil {
		return err
	}
	out := dayWriter{on: c.on, team: c.team, station: c.station}
	if err := out.add(ctx, span{planner.DayMin, days.first - 1}.of(before)...); err != nil {
		return err
	}
	for first := days.first; first <= days.last; first += daysAtOnce {
		if err := c.build(ctx, &out, span{first, min(first+daysAtOnce-1, days.last)}); err != nil {
			return err
		}
	}
	if err := out.add(ctx, span{days.last + 1, planner.DayMax}.of(after)...); err != nil {
		return err
	}
	return out.flush(ctx)
}

// build adds the facts of the days, of which nothing is kept.
func (c *cutter) build(ctx context.Context, out *dayWriter, days span) error {
	windows := make([]planner.Window, 0, days.last-days.first+1)
	from, to := int64(math.MaxInt64), int64(math.MinInt64)
	for day := days.first; day <= days.last; day++ {
		w := c.rules.On(day).Window(c.zone, day)
		windows = append(windows, w)
		from, to = min(from, w.Start-planner.Reach), max(to, w.End+planner.Reach)
	}
	if err := c.load(ctx, from, to); err != nil {
		return err
	}
	own, err := c.own(ctx, days)
	if err != nil {
		return err
	}
	for _, w := range windows {
		first := sort.Search(len(c.readings), func(i int) bool { return c.readings[i].At >= w.Start-planner.Reach })
		last := sort.Search(len(c.readings), func(i int) bool { return c.readings[i].At > w.End+planner.Reach })
		if err := out.add(ctx, planner.BuildDay(w, c.readings[first:last], own[w.Day])); err != nil {
			return err
		}
	}
	return nil
}

// load reads the readings of the stretch of time.
func (c *cutter) load(ctx context.Context, from, to int64) error {
	rows, err := c.on.QueryContext(ctx, `SELECT at, c FROM reading WHERE team = ? AND station = ? AND at BETWEEN ? AND ? ORDER BY at`,
		c.team, c.station, from, to)
	if err != nil {
		return err
	}
	defer rows.Close()
	c.readings = c.readings[:0]
	for rows.Next() {
		var reading planner.Reading
		if err := rows.Scan(&reading.At, &reading.C); err != nil {
			return err
		}
		c.readings = append(c.readings, reading)
	}
	return rows.Err()
}

// own reads the station's own daily readings of the days.
func (c *cutter) own(ctx context.Context, days span) (map[planner.Day]*planner.DailyReading, error) {
	byDay := map[planner.Day]*planner.DailyReading{}
	_, err := collect(ctx, c.on, func(rows *sql.Rows) (struct{}, error) {
		var daily planner.DailyReading
		var meanC sql.NullFloat64
		err := rows.Scan(&daily.Day, &daily.HighC, &daily.LowC, &meanC)
		daily.MeanC, daily.HasMean = meanC.Float64, meanC.Valid
		byDay[daily.Day] = &daily
		return struct{}{}, err
	}, `SELECT day, high_c, low_c, mean_c FROM daily WHERE team = ? AND station = ? AND day BETWEEN ? AND ?`,
		c.team, c.station, days.first, days.last)
	return byDay, err
}

// blank reports whether nothing is known of a day.
func blank(f planner.DayFacts) bool {
	return f.Empty() && f.SlotsReal == 0 && f.SlotsBridged == 0 && f.Doubt == ""
}
