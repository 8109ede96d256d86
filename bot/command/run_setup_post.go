package command

import (
	"context"
	"fmt"
	"slices"
	"strings"
	"time"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// Posted is a kind of post: a command whose answer is posted by itself.
type Posted struct {
	What  string // its word
	Path  string // the command
	Pairs []Pair // the options it is given
	Dated bool   // takes date: for the day it is posted
	// Yesterday says that it tells yesterday's weather, and is followed up when
	// that comes late.
	Yesterday bool
	// Weekly says that it comes on Mondays unless the lead names other days.
	Weekly bool
}

// posted are the kinds of posts there are; another one is another row.
var posted = []Posted{
	{What: "morning", Path: "briefing", Dated: true, Yesterday: true},
	{What: "evening", Path: "briefing", Pairs: []Pair{{"post", "tomorrow"}}, Dated: true},
	{What: "weekly", Path: "sheet get", Weekly: true},
}

// PostKind finds a kind of post by its word.
func PostKind(what string) (Posted, bool) {
	for _, kind := range posted {
		if kind.What == what {
			return kind, true
		}
	}
	return Posted{}, false
}

func (d Desk) setupPost() []Command {
	number := Option{Name: "number", Kind: Whole, Required: true, Range: Between(1, 1e6), Help: "which post; /setup post list tells", Example: "1"}
	at := Option{Name: "at", Kind: Text, Help: "when, on the site's clock", Example: "05:30"}
	what := Option{Name: "what", Kind: Choice, Choices: namesOf(posted, func(p Posted) string { return p.What }), Help: "the morning briefing when not given; evening is about tomorrow, weekly is the sheet"}
	options := []Option{
		{Name: "channel", Kind: ChatChannel, Help: "where; the channel you are in when not given"},
		{Name: "on", Kind: Text, Help: "days of the week with commas; every day when not given, Mondays for weekly", Example: "mon,thu"},
		{Name: "window", Kind: Number, Range: Between(0.25, 23), Help: "hours it may go out late; 4 when not given", Example: "4"},
		d.siteOption(),
	}
	return []Command{
		{Path: "setup post add", Short: "have the briefing posted each morning, or tomorrow's each evening", Who: Lead,
			Options:  append([]Option{required(at), what}, options...),
			Examples: []string{"/setup post add at:05:30 channel:1010101010101010101", "/setup post add at:18:00 what:evening channel:1010101010101010101"}, Run: d.runPostAdd},
		{Path: "setup post change", Short: "change a post, or take one up again after trouble", Who: Lead,
			Options:  append([]Option{number, at}, options...),
			Examples: []string{"/setup post change number:1 at:06:00"}, Run: d.runPostChange},
		{Path: "setup post drop", Short: "drop a post", Who: Lead, Asks: true, Options: []Option{number, d.siteOption()},
			Examples: []string{"/setup post drop number:1"}, Run: d.runPostDrop},
		{Path: "setup post list", Short: "the posts, and what became of the last days", Who: Lead, Options: []Option{d.siteOption()},
			Examples: []string{"/setup post list"}, Run: d.runPostList},
	}
}

// minute reads the option at, like 05:30.
func (v visit) minute(fallback int) (int, error) {
	text, given := v.Values.Text("at")
	if !given {
		return fallback, nil
	}
	clock, ok := readClock(text)
	if !ok {
		return 0, planner.Problemf(planner.Invalid, "%q is no time of the day", shorten(text)).WithHint("Give hour and minute. Like: at:05:30")
	}
	hour, minute := clockParts(clock)
	return 60*hour + minute, nil
}

// weekdays reads the option on, like mon,thu.
func (v visit) weekdays(fallback planner.Weekdays) (planner.Weekdays, error) {
	text, given := v.Values.Text("on")
	if !given {
		return fallback, nil
	}
	var days []time.Weekday
	for _, word := range strings.FieldsFunc(strings.ToLower(text), func(r rune) bool { return r == ',' || r == ' ' }) {
		found := slices.IndexFunc(everyWeekday, func(day time.Weekday) bool {
			return len(word) >= 3 && strings.HasPrefix(strings.ToLower(day.String()), word)
		})
		if found < 0 {
			return 0, planner.Problemf(planner.Invalid, "%q is no day of the week", shorten(word)).WithHint("Name days with commas. Like: on:mon,thu")
		}
		days = append(days, everyWeekday[found])
	}
	if len(days) == 0 {
		return 0, planner.Problemf(planner.Invalid, "no day of the week is given").WithHint("Name days with commas. Like: on:mon,thu")
	}
	return planner.WeekdaysOf(days...), nil
}

var everyWeekday = []time.Weekday{time.Sunday, time.Monday, time.Tuesday, time.Wednesday, time.Thursday, time.Friday, time.Saturday}

// postFrom reads the options of a post over what it was.
func (v visit) postFrom(post planner.Post) (planner.Post, error) {
	var err error
	if post.Minute, err = v.minute(post.Minute); err != nil {
		return post, err
	}
	if post.On, err = v.weekdays(post.On); err != nil {
		return post, err
	}
	if channel, given := v.Values.Text("channel"); given {
		post.Channel = channel
	} else if post.Channel == "" {
		post.Channel = v.Channel
	}
	if post.Channel == "" {
		return post, v.Missing("channel")
	}
	if window, given := v.Values.Number("window"); given {
		post.WindowMinutes = int(window * 60)
	}
	post.Trouble = ""
	return post, nil
}

// minutesPast is how long the post's time of today is past on the site's
// clock; less than 0 while it is still to come.
func (v visit) minutesPast(post planner.Post) int {
	now := v.NowAt(v.zone)
	return 60*now.Hour() + now.Minute() - post.Minute
}

// nextTime is the day on which a clock shows the post's time next.
func (v visit) nextTime(post planner.Post) planner.Day {
	if v.minutesPast(post) >= 0 {
		return v.today + 1
	}
	return v.today
}

// moved sets from which day on a post that comes at another time, on other
// days or after a hold is due. No day that was owed is lost: those that are past
// are recorded as missed, and today's goes out late or is recorded as missed
// too; said tells which.
func (d Desk) moved(ctx context.Context, v visit, was, post planner.Post) (moved planner.Post, said string, err error) {
	if was.Minute == post.Minute && was.On == post.On && was.Trouble == "" {
		return post, "", nil
	}
	post.From = v.nextTime(post)
	if d.Posts == nil {
		return post, "", nil
	}
	owed, err := d.firstOwed(ctx, v, was)
	if err != nil {
		return post, "", err
	}
	why := "not sent before the post was changed on " + v.today.Short()
	if was.Trouble != "" {
		why = was.Trouble
	}
	for ; owed < v.today; owed++ {
		if err := d.missed(ctx, v, was, owed, why); err != nil {
			return post, "", err
		}
	}
	switch stays := post.On.Has(v.today.Weekday()); {
	case owed > v.today || post.From == v.today && stays:
		return post, "", nil
	case !stays && v.minutesPast(was) < 0: // the lead takes the day out before its time
		return post, "", nil
	case !stays:
		return post, "", d.missed(ctx, v, was, v.today, why)
	case !was.On.Has(v.today.Weekday()): // it was none of its days
		return post, "", nil
	case v.minutesPast(post) <= post.WindowMinutes:
		post.From = v.today
		return post, "Today's goes out now.", nil
	}
	why = "moved from " + was.Clock() + " to " + post.Clock() + " at " + v.NowAt(v.zone).Format("15:04")
	return post, fmt.Sprintf("Today's does not come any more, %s is more than %s h past. The next one comes %s.", post.Clock(),
		plain(float64(post.WindowMinutes)/60), firstDay(post).Short()), d.missed(ctx, v, was, v.today, why)
}

// firstOwed is the first day of the post that has no row in the ledger.
func (d Desk) firstOwed(ctx context.Context, v visit, post planner.Post) (planner.Day, error) {
	rows, err := d.Posts.Postings(ctx, v.today)
	first := post.From
	for _, row := range rows {
		if row.Post == post.ID {
			first = max(first, row.Day+1)
		}
	}
	return first, err
}

// missed records a day of the post as one without, unless it is none of its
// days or has a row by now.
func (d Desk) missed(ctx context.Context, v visit, post planner.Post, day planner.Day, why string) error {
	if !post.On.Has(day.Weekday()) {
		return nil
	}
	_, err := d.Posts.Claim(ctx, planner.Posting{Post: post.ID, Day: day, State: planner.GivenUp, Channel: post.Channel, At: v.stamp().At, Reason: why})
	return err
}

func postText(post planner.Post) string {
	text := post.What + " post, " + post.On.String() + " at " + post.Clock() + " in channel:" + post.Channel
	if post.WindowMinutes != planner.DefaultWindowMinutes {
		text += fmt.Sprintf(", up to %s h late", plain(float64(post.WindowMinutes)/60))
	}
	return text
}

func (d Desk) runPostAdd(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	what := textOr(v.Values, "what", posted[0].What)
	fresh := planner.Post{Site: v.site.ID, What: what, WindowMinutes: planner.DefaultWindowMinutes}
	if kind, _ := PostKind(what); kind.Weekly {
		fresh.On = planner.WeekdaysOf(time.Monday)
	}
	post, err := v.postFrom(fresh)
	if err != nil {
		return reply.Reply{}, err
	}
	post.From = v.nextTime(post)
	for _, other := range v.setup.Posts {
		if other.Site == post.Site && other.What == post.What && other.Channel == post.Channel && other.Minute == post.Minute {
			return reply.Reply{}, planner.Problemf(planner.Taken, "That is post %d already.", other.ID).
				WithHint("/setup post change number:%d changes it.", other.ID)
		}
	}
	return d.kept(ctx, v.stamp(), post, reply.Of(reply.Textf("Added: %s. The first one comes %s.", postText(post), firstDay(post).Short()),
		reply.Text("A start after that time catches up within the window and says so; a day without a post is said in the next.")))
}

// firstDay is the first day on which the post is due.
func firstDay(post planner.Post) planner.Day {
	day := post.From
	for !post.On.Has(day.Weekday()) {
		day++
	}
	return day
}

// numberedPost is a visit and the post that number: names.
func (d Desk) numberedPost(ctx context.Context, req Request) (visit, planner.Post, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return visit{}, planner.Post{}, err
	}
	number, _ := v.Values.Whole("number")
	for _, post := range v.setup.Posts {
		if int(post.ID) == number && post.Site == v.site.ID {
			return v, post, nil
		}
	}
	return v, planner.Post{}, planner.Problemf(planner.NotFound, "%s has no post %d.", v.site.Name, number).
		WithHint("/setup post list shows the posts and their numbers.")
}

func (d Desk) runPostChange(ctx context.Context, req Request) (reply.Reply, error) {
	v, post, err := d.numberedPost(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	changed, err := v.postFrom(post)
	if err != nil {
		return reply.Reply{}, err
	}
	if err := changed.Check(); err != nil { // before anything is recorded
		return reply.Reply{}, err
	}
	changed, today, err := d.moved(ctx, v, post, changed)
	if err != nil {
		return reply.Reply{}, err
	}
	said := reply.Of(reply.Textf("Changed: %s.", postText(changed)))
	if today != "" {
		said.Add(reply.Text(today))
	}
	return d.kept(ctx, v.stamp(), changed, said)
}

func (d Desk) runPostDrop(ctx context.Context, req Request) (reply.Reply, error) {
	v, post, err := d.numberedPost(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	post.Archived = true
	return d.dropping(ctx, req, v.stamp(), post, "the "+postText(post), "")
}

func (d Desk) runPostList(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	var rows []planner.Posting
	if d.Posts != nil {
		if rows, err = d.Posts.Postings(ctx, v.today-postDays); err != nil {
			return reply.Reply{}, err
		}
	}
	var fields reply.Fields
	for _, post := range v.setup.Posts {
		if post.Site != v.site.ID {
			continue
		}
		text := postText(post)
		if post.Trouble != "" {
			text += "\nOn hold: " + post.Trouble + fmt.Sprintf(". Once that is seen to: /setup post change number:%d", post.ID)
		}
		fields = append(fields, reply.Field{Name: fmt.Sprintf("post %d", post.ID), Value: text + lastDays(post, rows)})
	}
	return listed(fields, "Nothing is posted yet. Like: /setup post add at:05:30"), nil
}

// postDays is how many days back the list looks.
const postDays = 7

// lastDays says what became of the post lately, where that was not as it
// should be.
func lastDays(post planner.Post, rows []planner.Posting) string {
	text, last := "", ""
	for _, row := range rows {
		switch {
		case row.Post != post.ID:
		case row.State == planner.Sent:
			last = "\nLast sent " + row.Day.Short() + "."
		case row.State == planner.GivenUp && row.Unsure:
			text += "\n" + row.Day.Short() + ": not known, " + shortenTo(row.Reason, 120) + "."
		case row.State == planner.GivenUp:
			text += "\n" + row.Day.Short() + ": none, " + shortenTo(row.Reason, 80) + "."
		case row.State == planner.Claimed:
			text += "\n" + row.Day.Short() + ": being sent."
		}
	}
	return last + text
}

func shortenTo(text string, most int) string {
	if runes := []rune(text); len(runes) > most {
		return string(runes[:most-1]) + "…"
	}
	return text
}
