package sqlite

import (
	"context"
	"database/sql"
	"slices"
	"time"

	"swardbook/planner"
)

// entries keeps planner.Entry. The time an entry was logged is kept in whole
// seconds, in UTC.
type entries struct{}

func (entries) list(ctx context.Context, on session, team int64, where string, args ...any) ([]planner.Entry, error) {
	args = append([]any{team}, args...)
	passes := map[planner.EntryID][]planner.Pass{}
	_, err := collect(ctx, on, func(rows *sql.Rows) (pass planner.Pass, err error) {
		var entry planner.EntryID
		err = rows.Scan(&entry, &pass.Work, &pass.NitrogenGM2, &pass.Rate.Kind, &pass.Rate.Value, &pass.Rate.NPercent,
			&pass.Part, &pass.Share, &pass.SlowShare, &pass.SlowWeeks)
		passes[entry] = append(passes[entry], pass)
		return pass, err
	}, `SELECT entry.id, work, nitrogen_g_m2, rate_kind, rate_value, n_percent, part, share, slow_share, slow_weeks FROM entry JOIN entry_pass
		ON entry_pass.team = entry.team AND entry_pass.entry = entry.id
		WHERE entry.team = ? AND `+where+` ORDER BY entry.id, entry_pass.place`, args...)
	if err != nil {
		return nil, err
	}
	return collect(ctx, on, func(rows *sql.Rows) (planner.Entry, error) {
		var entry planner.Entry
		var at int64
		err := rows.Scan(&entry.ID, &entry.Site, &entry.Day, &entry.By, &entry.ByID, &at, &entry.Note,
			&entry.Result, &entry.Clock, &entry.Watered, &entry.RainCounts, &entry.Undone)
		entry.At = time.Unix(at, 0).UTC()
		entry.Passes = passes[entry.ID]
		return entry, err
	}, `SELECT id, site, day, who, who_id, at, note, result, clock, watered, rain_counts, undone FROM entry WHERE team = ? AND `+where+` ORDER BY id`, args...)
}

// Entries returns the site's log, undone entries left out, by day and then in
// the order logged; nil for a site that the team does not have.
func (t *Team) Entries(ctx context.Context, site planner.SiteID) ([]planner.Entry, error) {
	const step = "read the work log"
	var log []planner.Entry
	err := t.db.read(ctx, step, func(conn *sql.Conn) (err error) {
		log, err = entries{}.list(ctx, conn, t.id, "site = ? AND undone = 0", site)
		return err
	})
	slices.SortStableFunc(log, func(a, b planner.Entry) int { return int(a.Day) - int(b.Day) })
	return log, err
}

func (entries) withID(entry planner.Entry, id int64) planner.Entry {
	entry.ID = planner.EntryID(id)
	entry.At = time.Unix(entry.At.Unix(), 0).UTC()
	return entry
}

func (entries) write(ctx context.Context, s saving, before, after planner.Entry) error {
	if before.ID != 0 && before.Site != after.Site {
		return planner.Problemf(planner.Invalid, "an entry cannot move to another site").
			WithHint("Undo it and log the work there.")
	}
	if err := s.parentIsOpen(ctx, "site", int64(after.Site)); err != nil {
		return err
	}
	err := s.put(ctx, "entry", after.Key(),
		column{"site", after.Site}, column{"day", after.Day}, column{"who", after.By}, column{"who_id", after.ByID}, column{"at", after.At.Unix()},
		column{"note", after.Note}, column{"result", after.Result}, column{"clock", after.Clock},
		column{"watered", after.Watered}, column{"rain_counts", after.RainCounts}, column{"undone", after.Undone})
	if err != nil {
		return err
	}
	if _, err := s.on.ExecContext(ctx, `DELETE FROM entry_pass WHERE team = ? AND entry = ?`, s.team, after.ID); err != nil {
		return err
	}
	for place, pass := range after.Passes {
		if err := s.allowPass(ctx, before, after, place); err != nil {
			return err
		}
		_, err := s.on.ExecContext(ctx, `INSERT INTO entry_pass (team, entry, place, work, nitrogen_g_m2,
			rate_kind, rate_value, n_percent, part, share, slow_share, slow_weeks) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
			s.team, after.ID, place, pass.Work, pass.NitrogenGM2, pass.Rate.Kind, pass.Rate.Value, pass.Rate.NPercent,
			pass.Part, pass.Share, pass.SlowShare, pass.SlowWeeks)
		if err != nil {
			return err
		}
	}
	return nil
}

// allowPass refuses a pass of a work that the entry names already, that is not
// a work of the entry's site, or that has been dropped; but a pass that the
// entry had before stays though its work was dropped since.
func (s saving) allowPass(ctx context.Context, before, after planner.Entry, place int) error {
	work := after.Passes[place].Work
	for _, earlier := range after.Passes[:place] {
		if earlier.Work == work {
			return planner.Problemf(planner.Invalid, "the entry names the same work twice").
				WithHint("Log one pass of a work in an entry; log a second pass as another entry.")
		}
	}
	_, hadIt := before.Of(work)
	return mustExist(ctx, s.on, "work", int64(work), `SELECT 1 FROM work JOIN surface
		ON surface.team = work.team AND surface.id = work.surface
		WHERE work.team = ? AND work.id = ? AND surface.site = ?
		AND (? OR work.archived = 0 AND surface.archived = 0)`, s.team, work, after.Site, hadIt)
}
