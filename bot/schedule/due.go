// Package schedule decides which posts are due and sees that each goes out
// exactly once a day.
//
// It must not know a chat server or how a post is composed: both come in as
// small interfaces. It reads no clock; the tick brings the time.
package schedule

import (
	"cmp"
	"fmt"
	"slices"
	"time"

	"swardbook/planner"
)

// Doing is what is to be done about a post.
type Doing string

// The doings.
const (
	Send     Doing = "send"      // claim it and send it
	Settle   Doing = "settle"    // claimed, outcome unknown: look into the channel first
	Miss     Doing = "miss"      // record that the day has no post, and why
	FollowUp Doing = "follow-up" // send the second part, if the day's weather is whole by now
)

// Task is one thing to do about one post on one day.
type Task struct {
	Post planner.Post
	Day  planner.Day
	Part int
	Do   Doing
	// Due is the instant the post is due.
	Due time.Time
	// Late says that it goes out noticeably after that.
	Late bool
	// Reason says why the day is missed.
	Reason string
	// Expired says that the window is over: what is found is recorded, nothing
	// is sent any more.
	Expired bool
	// Hopeless says that the window has been over for a day: what cannot be
	// found out by now is given up.
	Hopeless bool
	// Missed are the days which got no post and of which none has told yet.
	Missed []Missed
	// Row is the ledger's row, when there is one.
	Row planner.Posting
	// Posted is the newest row before the day of what was sent with its
	// figures, for telling what late readings have corrected since.
	Posted planner.Posting
}

// Missed is a day without a post.
type Missed struct {
	Day    planner.Day
	Unsure bool // it may have had one
}

// Timed is a post with the zone of its site.
type Timed struct {
	planner.Post
	Zone *time.Location
}

const (
	// lateAfter is from when on a post says that it is late: a few ticks.
	lateAfter = 5 * time.Minute
	// hopelessAfter is how long after its window a claimed post is looked for
	// where looking fails.
	hopelessAfter = 24 * time.Hour
	// mostDays bounds how many missed days of one post are recorded in one
	// tick; what is left comes with the next.
	mostDays = 400
)

// Due says what is to be done now: of each post, settle what is open, record
// the days whose window has passed without a post, and send what is due. It is
// pure; the ledger's rows must hold every claimed row and those of each post's
// newest day.
//
// A post is due at its time on the site's clock. A time that the clocks skip
// is due at the next that exists, one that comes twice at the first, and a day
// that the calendar skips has no post. Every day from the post's first on gets
// a row, in order, so the newest row says from where to go on.
func Due(posts []Timed, ledger []planner.Posting, now time.Time) []Task {
	var tasks []Task
	for _, post := range posts {
		tasks = append(tasks, dueOf(post, rowsOf(ledger, post.ID), now)...)
	}
	return tasks
}

func rowsOf(ledger []planner.Posting, post planner.PostID) []planner.Posting {
	var rows []planner.Posting
	for _, row := range ledger {
		if row.Post == post {
			rows = append(rows, row)
		}
	}
	slices.SortFunc(rows, func(a, b planner.Posting) int {
		return cmp.Or(cmp.Compare(a.Day, b.Day), cmp.Compare(a.Part, b.Part))
	})
	return rows
}

func dueOf(post Timed, rows []planner.Posting, now time.Time) []Task {
	tasks, missed := begun(post, rows, now)
	first := post.From
	for _, row := range rows {
		first = max(first, row.Day+1)
	}
	return append(tasks, fresh(post, first, missed, now)...)
}

// begun are the tasks of days that have a row, and the days without a post that
// none has told yet: those given up since the last one that went out.
func begun(post Timed, rows []planner.Posting, now time.Time) (tasks []Task, missed []Missed) {
	today := planner.DayIn(now, post.Zone)
	givenUpAt := map[planner.Day]time.Time{}
	for i, row := range rows {
		due, _ := DueAt(row.Day, post.Minute, post.Zone)
		followed := i+1 < len(rows) && rows[i+1].Day == row.Day
		task := Task{Post: post.Post, Day: row.Day, Part: row.Part, Due: due, Row: row}
		switch {
		case row.State == planner.Claimed:
			task.Do, task.Missed = Settle, slices.Clone(missed)
			task.Late = row.Part == 0 && now.Sub(due) > lateAfter
			// A follow-up may come until the day is over.
			task.Expired = row.Part == 0 && now.Sub(due) > post.window() || row.Part == 1 && row.Day < today
			task.Hopeless = now.Sub(due) > post.window()+hopelessAfter
			tasks = append(tasks, task)
		case row.Part != 0:
		case row.State == planner.GivenUp:
			missed, givenUpAt[row.Day] = append(missed, Missed{row.Day, row.Unsure}), row.At
		case row.State == planner.Sent:
			missed = slices.DeleteFunc(missed, func(m Missed) bool { return !givenUpAt[m.Day].After(row.At) })
			if row.Partial && row.Day == today && !followed {
				task.Do, task.Part = FollowUp, 1
				tasks = append(tasks, task)
			}
		}
	}
	return tasks, missed
}

// fresh are the tasks of days from the first on, which have no row yet.
func fresh(post Timed, first planner.Day, missed []Missed, now time.Time) (tasks []Task) {
	today := planner.DayIn(now, post.Zone)
	for day := first; day <= today && len(tasks) < mostDays; day++ {
		due, exists := DueAt(day, post.Minute, post.Zone)
		if !exists || !post.On.Has(day.Weekday()) {
			continue
		}
		if due.After(now) {
			break
		}
		task := Task{Post: post.Post, Day: day, Do: Send, Due: due, Late: now.Sub(due) > lateAfter, Missed: slices.Clone(missed)}
		switch {
		case post.Trouble != "":
			task.Do, task.Reason = Miss, post.Trouble
		case now.Sub(due) > post.window():
			task.Do, task.Reason = Miss, "not running at "+post.Clock()+", nor within "+hours(post.WindowMinutes)+" after"
		}
		if task.Do == Miss {
			missed = append(missed, Missed{Day: day})
		}
		tasks = append(tasks, task)
	}
	return tasks
}

func (t Timed) window() time.Duration { return time.Duration(t.WindowMinutes) * time.Minute }

func hours(minutes int) string {
	if minutes%60 == 0 {
		return fmt.Sprintf("%d h", minutes/60)
	}
	return fmt.Sprintf("%d minutes", minutes)
}

// DueAt is the instant at which a clock in the zone shows the minute of the
// day for the first time: the first instant of the two when clocks go back
// over it, the instant of the change when they skip it. exists is false when
// the zone's calendar skips the whole day.
func DueAt(day planner.Day, minute int, zone *time.Location) (at time.Time, exists bool) {
	year, month, date := day.Date()
	wall := time.Date(year, month, date, 0, minute, 0, 0, time.UTC)
	// No offset from UTC is more than a day: look at each stretch with one
	// offset that comes near.
	probe := wall.Add(-26 * time.Hour)
	for probe.Before(wall.Add(26 * time.Hour)) {
		local := probe.In(zone)
		start, end := local.ZoneBounds()
		_, offset := local.Zone()
		at = wall.Add(-time.Duration(offset) * time.Second)
		if !start.IsZero() && at.Before(start) {
			at = start // the clocks went past it here
		}
		if end.IsZero() || at.Before(end) {
			break
		}
		probe = end
	}
	return at.UTC(), planner.DayIn(at, zone) == day
}
