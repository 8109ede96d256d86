package planner

import (
	"context"
	"strings"
	"time"
)

// PostID names a post for good.
type PostID int64

// Post is what a site's crew gets in its channel by itself: the morning
// briefing, each day at one time of the site's clock.
type Post struct {
	ID   PostID `json:"id"`
	Site SiteID `json:"site"`
	What string `json:"what"` // what is posted: morning
	// Minute is the time it is due, in minutes after midnight on the site's
	// clock: 330 is 05:30.
	Minute  int      `json:"minute"`
	On      Weekdays `json:"on,omitempty"`
	Channel string   `json:"channel"` // where, as the chat server names it
	// WindowMinutes is how late it may still go out: past that the day is
	// recorded as missed.
	WindowMinutes int `json:"window_minutes"`
	// From is the first day it is due.
	From Day `json:"from"`
	// Trouble says why nothing is sent until a lead has seen to it: the channel
	// is gone, or closed to the bot. Empty when all is well.
	Trouble  string `json:"trouble,omitempty"`
	Archived bool   `json:"archived,omitempty"`
}

// DefaultWindowMinutes is how late a post goes out when the lead says nothing:
// four hours, past which a crew has long headed out.
const DefaultWindowMinutes = 4 * 60

const (
	minutesPerDay    = 24 * 60
	minWindowMinutes = 15      // a restart takes a few
	maxWindowMinutes = 23 * 60 // less than a day, so that no post meets the next
	maxOutsideID     = 64
)

// Kind returns "post".
func (Post) Kind() string { return "post" }

// Key returns the post's id.
func (p Post) Key() int64 { return int64(p.ID) }

// Clock writes the time it is due: "05:30".
func (p Post) Clock() string { return ClockOf(p.Minute) }

// ClockOf writes minutes after midnight as a clock shows them.
func ClockOf(minute int) string {
	return time.Date(2000, 1, 1, 0, minute, 0, 0, time.UTC).Format("15:04")
}

// Check refuses a post without a site, a kind, a channel, a time of the day or
// a window of less than a day.
func (p Post) Check() error {
	if p.Site == 0 || p.What == "" {
		return Problemf(Invalid, "the post has no site, or nothing to say")
	}
	if p.Minute < 0 || p.Minute >= minutesPerDay {
		return Problemf(Invalid, "minute %d is no time of the day", p.Minute).WithHint("Give a time like 05:30.")
	}
	if p.WindowMinutes < minWindowMinutes || p.WindowMinutes > maxWindowMinutes {
		return Problemf(Invalid, "a post cannot go out %d minutes late", p.WindowMinutes).WithHint("Give a quarter of an hour to 23 hours, like window:4.")
	}
	if p.On > everyWeekday {
		return Problemf(Invalid, "there are seven days in a week")
	}
	return checkOutside("channel", p.Channel)
}

// checkOutside refuses what cannot be an id that a chat server gives.
func checkOutside(what, id string) error {
	if id == "" || len(id) > maxOutsideID || strings.ContainsFunc(id, func(r rune) bool { return r <= ' ' || r > '~' }) {
		return Problemf(Invalid, "%q is no %s of a chat server", id, what).
			WithHint("Choose it from the list that the chat offers, or give its number.")
	}
	return nil
}

// Weekdays is a set of days of the week, a bit each from Sunday; the empty set
// stands for every day.
type Weekdays uint8

const everyWeekday Weekdays = 1<<7 - 1

// WeekdaysOf is the set of the days; of none, every day.
func WeekdaysOf(days ...time.Weekday) (set Weekdays) {
	for _, day := range days {
		set |= 1 << day
	}
	if set == everyWeekday {
		return 0
	}
	return set
}

// Has reports whether the day of the week is in the set.
func (w Weekdays) Has(day time.Weekday) bool { return w == 0 || w&(1<<day) != 0 }

// String writes the set, from Monday: "mon,thu"; "every day" when it is empty.
func (w Weekdays) String() string {
	if w == 0 {
		return "every day"
	}
	var names []string
	for i := range 7 {
		if day := time.Weekday((i + 1) % 7); w.Has(day) {
			names = append(names, strings.ToLower(day.String()[:3]))
		}
	}
	return strings.Join(names, ",")
}

// PostingState is how far a post has come on its day.
type PostingState string

// The states of a posting. A claimed one may have been sent: whoever finds it
// looks into the channel before sending.
const (
	Claimed PostingState = "claimed"
	Sent    PostingState = "sent"
	GivenUp PostingState = "given-up"
)

// Posting is a row of the ledger: what became of a post on one day.
type Posting struct {
	Post PostID
	Day  Day
	// Part is 0 for the post and 1 for its follow-up, which goes out once the
	// weather that the post lacked is there.
	Part    int
	State   PostingState
	Channel string    // that it was claimed for; empty in old rows: the post's
	At      time.Time // when it came to this state
	Message string    // once sent: the message, as the chat server names it
	Reason  string    // why it was given up, or what went wrong last
	Partial bool      // sent while yesterday's weather was not whole
	Figures Figures   // once sent: what it said, to tell later what was corrected
	// Unsure says of a row given up that it may have been sent all the same.
	Unsure bool
}

// PostLedger keeps what became of each post on each day, for one team.
type PostLedger interface {
	// Postings returns, by post, day and part, the rows of the day and after,
	// every claimed row, and of each post the rows of its newest day.
	Postings(ctx context.Context, from Day) ([]Posting, error)
	// Claim adds a row, and reports false when the post has one for that day
	// and part already. Once it returns true the row outlives a crash.
	Claim(ctx context.Context, posting Posting) (bool, error)
	// Settle says what became of a claimed row. A row that is not there, or no
	// longer claimed, is a NotFound problem.
	Settle(ctx context.Context, posting Posting) error
}

// LineKeeper keeps command lines that are too long for a button, for one team.
type LineKeeper interface {
	// KeepLine keeps the line and returns its number; the same line has one.
	KeepLine(ctx context.Context, line string, at time.Time) (int64, error)
	// Line returns the line with the number, or a NotFound problem.
	Line(ctx context.Context, number int64) (string, error)
}
