package sqlite

import (
	"context"
	"database/sql"
	"fmt"
	"slices"
	"strings"

	"swardbook/planner"
)

// setting says where the values of one kind of planner.Dated are kept.
type setting[T comparable] struct {
	table   string
	parent  string         // the column that holds the noun's id
	columns string         // of the value, in the order of fields
	fields  func(*T) []any // the value's parts, to read into and to write from
	words   string         // what one is, in a problem
}

var (
	siteRules = setting[planner.DayRule]{
		table: "site_rule", parent: "site", words: "day rule",
		columns: "offset_seconds, boundary, closing_hour, first_slot",
		fields: func(r *planner.DayRule) []any {
			return []any{&r.OffsetSeconds, &r.Boundary, &r.ClosingHour, &r.FirstSlot}
		},
	}
	surfaceTurf = setting[planner.Turf]{
		table: "surface_turf", parent: "surface", words: "grass",
		columns: "grass, optimum_c, width_c, held_above, ceiling_g_m2, budget_g_m2",
		fields: func(t *planner.Turf) []any {
			return []any{&t.Grass, &t.Curve.OptimumC, &t.Curve.WidthC, &t.Curve.HeldAbove, &t.CeilingGM2, &t.BudgetGM2}
		},
	}
	workSettings = setting[planner.WorkSettings]{
		table: "work_setting", parent: "work", words: "setting",
		columns: "counts, method, lower_c, upper_c, cutoff, target, basis, latest, " +
			"least_days, most_times, most_total, season_from_month, season_from_day, season_to_month, season_to_day, " +
			"resting, starts_empty, watered_in, rain_free_hours, origin_source, origin_ingredient, origin_grass, origin_height_mm",
		fields: func(s *planner.WorkSettings) []any {
			return append(countingFields(&s.Counting), &s.Target, &s.Basis, &s.Latest,
				&s.Limits.LeastDays, &s.Limits.MostTimes, &s.Limits.MostTotal,
				&s.Season.From.Month, &s.Season.From.Day, &s.Season.To.Month, &s.Season.To.Day,
				&s.Season.Resting, &s.Season.StartsEmpty, &s.WateredIn, &s.RainFreeHours,
				&s.Origin.Source, &s.Origin.Ingredient, &s.Origin.Grass, &s.Origin.HeightMM)
		},
	}
	totalSettings = setting[planner.TotalSettings]{
		table: "total_setting", parent: "total", words: "setting",
		columns: "counts, method, lower_c, upper_c, cutoff, optimum_c, width_c, held_above, start_month, start_day",
		fields: func(s *planner.TotalSettings) []any {
			return append(countingFields(&s.Counting),
				&s.Curve.OptimumC, &s.Curve.WidthC, &s.Curve.HeldAbove, &s.Start.Month, &s.Start.Day)
		},
	}
)

func countingFields(c *planner.Counting) []any {
	return []any{&c.Counts, &c.Method, &c.Thresholds.LowerC, &c.Thresholds.UpperC, &c.Thresholds.Cutoff}
}

// all returns the settings of every noun of the team, by the noun's id.
func (s setting[T]) all(ctx context.Context, on session, team int64) (map[int64]planner.Dated[T], error) {
	byParent := map[int64]planner.Dated[T]{}
	query := fmt.Sprintf(`SELECT %s, valid_from, %s FROM %s WHERE team = ? ORDER BY %s, valid_from, step`,
		s.parent, s.columns, s.table, s.parent)
	_, err := collect(ctx, on, func(rows *sql.Rows) (struct{}, error) {
		var parent int64
		var from planner.From[T]
		err := rows.Scan(append([]any{&parent, &from.Day}, s.fields(&from.Value)...)...)
		byParent[parent] = append(byParent[parent], from)
		return struct{}{}, err
	}, query, team)
	return byParent, err
}

// added returns the values of after that are not in before. Settings are added,
// never changed or removed: after must hold all of before in its order, and a
// new value of a day that has one must stand behind it, where it will be when
// it is read again.
func (s setting[T]) added(before, after planner.Dated[T]) (planner.Dated[T], error) {
	kept, merged := 0, slices.Clone(before)
	var added planner.Dated[T]
	for _, from := range after {
		if kept < len(before) && from == before[kept] {
			kept++
			continue
		}
		added = append(added, from)
		merged = merged.With(from.Day, from.Value)
	}
	if kept < len(before) {
		return nil, planner.Problemf(planner.Invalid, "the %s of %s is kept and cannot be changed or removed", s.words, before[kept].Day).
			WithHint("Add another one that is valid from a day; older figures stay as they were.")
	}
	if !slices.Equal(merged, after) {
		return nil, planner.Problemf(planner.Invalid, "the days from which the %ss hold are not in order", s.words).
			WithHint("Give the oldest first; a value for a day that has one comes after it.")
	}
	return added, nil
}

// keep adds the noun's settings that are not kept yet, with the change that
// brings them, and returns them.
func (s setting[T]) keep(ctx context.Context, by saving, parent int64, before, after planner.Dated[T]) (planner.Dated[T], error) {
	added, err := s.added(before, after)
	if err != nil {
		return nil, err
	}
	query := fmt.Sprintf(`INSERT INTO %[1]s (team, %[2]s, step, valid_from, change, %[3]s)
		SELECT ?1, ?2, 1 + coalesce(max(step), 0), ?3, ?4%[4]s FROM %[1]s WHERE team = ?1 AND %[2]s = ?2`,
		s.table, s.parent, s.columns, numbered(5, strings.Count(s.columns, ",")+1))
	for _, from := range added {
		args := append([]any{by.team, parent, from.Day, by.change}, s.fields(&from.Value)...)
		if _, err := by.on.ExecContext(ctx, query, args...); err != nil {
			return nil, err
		}
	}
	return added, nil
}

// numbered writes n placeholders from the first on, each behind a comma.
func numbered(first, n int) string {
	var out strings.Builder
	for i := range n {
		fmt.Fprintf(&out, ", ?%d", first+i)
	}
	return out.String()
}
