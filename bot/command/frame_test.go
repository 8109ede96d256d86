package command

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"slices"
	"strings"
	"testing"
	"time"

	"swardbook/bot/reply"
	"swardbook/planner"
)

// echo is a handler that says how it was called.
func echo(_ context.Context, req Request) (reply.Reply, error) {
	return reply.Of(reply.Textf("ask %t confirmed %t %s", req.Ask, req.Confirmed, req.Line)), nil
}

// sample is a small table with every kind of option.
func sample(log *slog.Logger) Table {
	surfaces := func(_ context.Context, req Request, prefix string) []string {
		names := []string{"Greens", "Front nine", "Tees"}
		return slices.DeleteFunc(names, func(name string) bool {
			return !strings.HasPrefix(strings.ToLower(name), strings.ToLower(prefix))
		})
	}
	return New(log,
		Command{
			Path: "due", Short: "days until due", Listed: true, Run: echo, Examples: []string{"/due", "/due greens regulator"},
			Options: []Option{
				{Name: "surface", Kind: Name, Help: "which surface", Complete: surfaces},
				{Name: "work", Kind: Name, Help: "which work", Complete: func(_ context.Context, req Request, _ string) []string {
					surface, _ := req.Values.Text("surface")
					return []string{"feed " + strings.ToLower(surface)}
				}},
			},
		},
		Command{
			Path: "done", Short: "log what was done", Listed: true, Asks: true, Run: echo, Examples: []string{"/done greens regulator"},
			Options: []Option{
				{Name: "surfaces", Kind: Names, Required: true, Help: "where", Complete: surfaces},
				{Name: "works", Kind: Names, Required: true, Help: "what"},
				{Name: "when", Kind: Day, Past: true, Help: "which day"},
				{Name: "rate", Kind: Number, Range: AtLeast(0), Help: "nitrogen given"},
				{Name: "note", Kind: Text, Help: "anything worth keeping"},
			},
		},
		Command{
			Path: "whatif", Short: "as it stands beside what-if", Listed: true, Run: echo, Examples: []string{`/whatif warmer:2c highs:"29 30 28"`},
			Options: []Option{
				{Name: "warmer", Kind: Warming, Help: "how much", Range: Between(-50, 50)},
				{Name: "warm-from", Kind: Day, Help: "from when"},
				{Name: "highs", Kind: Numbers, Help: "highs of the days", Range: Between(-60, 140)},
				{Name: "days", Kind: Whole, Range: Between(1, 60), Help: "how many days"},
				{Name: "target", Kind: Target, Help: "another target"},
				{Name: "low", Kind: Temperature, Help: "tonight's low"},
				{Name: "keep", Kind: Yes, Help: "keep it"},
			},
		},
		Command{
			Path: "help", Short: "how to use it", Listed: true, Run: echo, Examples: []string{"/help growth potential"},
			Options: []Option{{Name: "topic", Kind: Text, Help: "about what", Example: "growth potential"}},
		},
		Command{
			Path: "log undo", Short: "take an entry back", Run: echo, Examples: []string{"/log undo 7"},
			Options: []Option{{Name: "entry", Kind: Whole, Required: true, Range: AtLeast(1), Help: "its number"}},
		},
		Command{
			Path: "setup work add", Short: "a work that comes round again", Who: Lead, Run: echo,
			Examples: []string{"/setup work add surface:greens name:regulator counts:degree-days base:0 target:200"},
			Options: []Option{
				{Name: "surface", Kind: Name, Required: true, Help: "on which surface"},
				{Name: "name", Kind: Name, Required: true, Help: "its name", Example: "regulator"},
				{Name: "counts", Kind: Choice, Required: true, Choices: []string{"days", "degree-days"}, Help: "by what it counts"},
				{Name: "base", Kind: Temperature, Help: "the base of degree days", Example: "0"},
				{Name: "target", Kind: Target, Help: "the total at which it is due"},
				{Name: "season", Kind: MonthDay, Help: "the first day of its season"},
			},
		},
		Command{
			Path: "setup work list", Short: "the works", Who: Lead, Run: echo, Examples: []string{"/setup work list"},
		},
		Command{
			Path: "weather file", Short: "read a station's file", Who: Lead, Run: echo, Examples: []string{"/weather file week.csv"},
			Options: []Option{{Name: "file", Kind: File, Required: true, Help: "the file"}},
		},
		Command{
			Path: "crash", Short: "goes wrong", Who: Lead, Examples: []string{"/crash"}, Run: func(context.Context, Request) (reply.Reply, error) {
				panic("out of grass")
			},
		},
	)
}

func TestSampleTablePasses(t *testing.T) {
	if err := sample(nil).Check(); err != nil {
		t.Fatal(err)
	}
}

var noon = time.Date(2013, 6, 20, 12, 0, 30, 0, time.UTC)

func TestRolesDecideWhoMay(t *testing.T) {
	tests := []struct {
		role Role
		line string
		kind planner.Kind // empty: it runs
	}{
		{Crew, "/due", ""},
		{Crew, "/log undo 7", ""}, // not listed, and still the crew's
		{Crew, "/setup work list", planner.Forbidden},
		{Crew, "/setup work add", planner.Forbidden}, // before its options are asked for
		{Crew, "/setup work add nonsense:1", planner.Forbidden},
		{Lead, "/setup work list", ""},
		{Lead, "/setup work add", planner.Missing},
		{Lead, "/due", ""},
	}
	for _, test := range tests {
		req := Request{Caller: Caller{ID: "1", Role: test.role}, Now: noon, Line: test.line}
		_, err := sample(nil).Run(context.Background(), req)
		if got := kindOf(err); got != test.kind {
			t.Errorf("%s as %s: %v is %q, want %q", test.line, test.role, err, got, test.kind)
		}
	}
	_, err := sample(nil).Run(context.Background(), Request{Line: "/setup work list"})
	if err == nil || err.Error() != "only a lead may use /setup work list" {
		t.Errorf("a crew member is told %v", err)
	}
}

func kindOf(err error) planner.Kind {
	if err == nil {
		return ""
	}
	return planner.KindOf(err)
}

func TestVisibleHidesFromTheCrew(t *testing.T) {
	table := sample(nil)
	paths := func(role Role) (out []string) {
		for _, command := range table.Visible(role) {
			out = append(out, command.Path)
		}
		return out
	}
	if got, want := paths(Crew), []string{"due", "done", "whatif", "help"}; !slices.Equal(got, want) {
		t.Errorf("crew sees %v, want %v", got, want)
	}
	if got := len(paths(Lead)); got != len(table.All()) {
		t.Errorf("a lead sees %d commands of %d", got, len(table.All()))
	}
}

func textOf(r reply.Reply) string {
	for _, block := range r.Blocks {
		if text, ok := block.(reply.Text); ok {
			return string(text)
		}
	}
	return ""
}

func TestAsksBeforeItActs(t *testing.T) {
	table, ctx := sample(nil), context.Background()
	req := Request{Caller: Caller{ID: "ann"}, Now: noon, Line: "done  Greens regulator  when:yesterday"}
	asked, err := table.Run(ctx, req)
	if err != nil {
		t.Fatal(err)
	}
	line := "/done surfaces:Greens works:regulator when:yesterday"
	if got, want := textOf(asked), "ask true confirmed false "+line; got != want {
		t.Errorf("first: %q, want %q", got, want)
	}
	if asked.Confirm == nil || asked.Confirm.Line != line || len(asked.Confirm.Code) != confirmLength || asked.Confirm.Question == "" {
		t.Fatalf("first: confirm %+v", asked.Confirm)
	}
	req.Line = asked.Confirm.Answer()
	acted, err := table.Run(ctx, req)
	if err != nil {
		t.Fatal(err)
	}
	if got, want := textOf(acted), "ask false confirmed true "+line; got != want || acted.Confirm != nil {
		t.Errorf("confirmed: %q and %+v, want %q and no question", got, acted.Confirm, want)
	}
	req.Line, req.Confirmed = line, true
	if acted, err = table.Run(ctx, req); err != nil || acted.Confirm != nil || !strings.HasPrefix(textOf(acted), "ask false") {
		t.Errorf("confirmed from outside: %v %+v %v", textOf(acted), acted.Confirm, err)
	}
}

func TestConfirmCodeHoldsTenMinutesForOnePersonAndLine(t *testing.T) {
	table, ctx := sample(nil), context.Background()
	line := "/done surfaces:greens works:regulator"
	asked, err := table.Run(ctx, Request{Caller: Caller{ID: "ann"}, Now: noon, Line: line})
	if err != nil {
		t.Fatal(err)
	}
	code := asked.Confirm.Code
	tests := []struct {
		name   string
		caller string
		line   string
		after  time.Duration
		ok     bool
	}{
		{"at once", "ann", line + " confirm:" + code, 0, true},
		{"small letters", "ann", line + " confirm:" + strings.ToLower(code), 0, true},
		{"other order", "ann", "/done confirm:" + code + " works:regulator surfaces:greens", 0, true},
		{"10 minutes on", "ann", line + " confirm:" + code, 10 * time.Minute, true},
		{"11 minutes on", "ann", line + " confirm:" + code, 11 * time.Minute, false},
		{"before it was given", "ann", line + " confirm:" + code, -time.Minute, false},
		{"somebody else", "bob", line + " confirm:" + code, 0, false},
		{"another line", "ann", line + " rate:2 confirm:" + code, 0, false},
		{"another code", "ann", line + " confirm:0000", 0, false},
	}
	for _, test := range tests {
		out, err := table.Run(ctx, Request{Caller: Caller{ID: test.caller}, Now: noon.Add(test.after), Line: test.line})
		if (err == nil) != test.ok {
			t.Errorf("%s: %v, want ok %t", test.name, err, test.ok)
		}
		if err != nil && kindOf(err) != planner.Refused {
			t.Errorf("%s: kind %s, want refused", test.name, kindOf(err))
		}
		if err == nil && !strings.HasPrefix(textOf(out), "ask false confirmed true") {
			t.Errorf("%s: %s", test.name, textOf(out))
		}
	}
}

// The window must not depend on which side of 1970 a site's clock stands.
func TestMinuteOfRoundsDown(t *testing.T) {
	for second, want := range map[int64]int64{-61: -2, -60: -1, -59: -1, -1: -1, 0: 0, 59: 0, 60: 1} {
		if got := minuteOf(time.Unix(second, 0)); got != want {
			t.Errorf("minute of second %d is %d, want %d", second, got, want)
		}
	}
}

func TestHandlerMayAskAndChooseTheLineToConfirm(t *testing.T) {
	run := func(_ context.Context, req Request) (reply.Reply, error) {
		if req.Confirmed {
			return reply.Of(reply.Text("acted on " + req.Line)), nil
		}
		return reply.Reply{Confirm: &reply.Confirm{Question: "Nitrogen or product?", Line: "feed  rate:7 day:2013-06-19"}}, nil
	}
	table := New(nil, Command{Path: "feed", Short: "a feed", Run: run, Examples: []string{"/feed"}, Options: []Option{
		{Name: "day", Kind: Day, Help: "when"}, {Name: "rate", Kind: Number, Help: "how much"}}})
	asked, err := table.Run(context.Background(), Request{Now: noon, Line: "/feed yesterday 7"})
	if err != nil || asked.Confirm == nil {
		t.Fatal(asked, err)
	}
	if got, want := asked.Confirm.Line, "/feed day:2013-06-19 rate:7"; got != want || asked.Confirm.Question != "Nitrogen or product?" {
		t.Errorf("asks %q for %q, want %q", asked.Confirm.Question, got, want)
	}
	acted, err := table.Run(context.Background(), Request{Now: noon, Line: asked.Confirm.Answer()})
	if err != nil || textOf(acted) != "acted on /feed day:2013-06-19 rate:7" {
		t.Errorf("confirmed: %q %v", textOf(acted), err)
	}
}

func TestWhatGoesWrongInAHandler(t *testing.T) {
	tests := []struct {
		name   string
		run    Handler
		kind   planner.Kind
		shown  string // begins the message
		logged string // empty: nothing is logged
	}{
		{"panic", func(context.Context, Request) (reply.Reply, error) { panic("out of grass") },
			planner.Internal, "something went wrong on our side in /x", "out of grass"},
		{"error without a sentence", func(context.Context, Request) (reply.Reply, error) { return reply.Reply{}, errors.New("disk at 0x7f") },
			planner.Internal, "something went wrong on our side in /x", "disk at 0x7f"},
		{"problem, wrapped", func(context.Context, Request) (reply.Reply, error) {
			return reply.Reply{}, fmt.Errorf("load plan: %w", planner.Problemf(planner.NotFound, "no site"))
		}, planner.NotFound, "load plan: no site", ""},
		{"own mistake with a sentence", func(context.Context, Request) (reply.Reply, error) {
			return reply.Reply{}, planner.Problemf(planner.Internal, "the record is not in order")
		}, planner.Internal, "the record is not in order", "the record is not in order"},
		{"reply over a limit", func(context.Context, Request) (reply.Reply, error) {
			return reply.Of(reply.Text(strings.Repeat("°", reply.MaxText+1))), nil
		}, planner.Internal, "something went wrong on our side in /x", "4001 characters"},
		{"line to confirm that cannot be read", func(context.Context, Request) (reply.Reply, error) {
			return reply.Reply{Confirm: &reply.Confirm{Line: "/nonsense"}}, nil
		}, planner.Internal, "something went wrong on our side in /x", "nonsense"},
		{"stopped", func(ctx context.Context, _ Request) (reply.Reply, error) {
			return reply.Reply{}, fmt.Errorf("wait: %w", context.Canceled)
		}, planner.Busy, "/x was stopped", ""},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			var log bytes.Buffer
			table := New(slog.New(slog.NewTextHandler(&log, nil)), Command{Path: "x", Run: test.run})
			ctx, cancel := context.WithCancel(context.Background())
			cancel()
			_, err := table.Run(ctx, Request{Now: noon, Line: "x"})
			if kindOf(err) != test.kind || !strings.HasPrefix(err.Error(), test.shown) {
				t.Errorf("%q of kind %s, want %q… of kind %s", err, kindOf(err), test.shown, test.kind)
			}
			if test.logged == "" && log.Len() > 0 || !strings.Contains(log.String(), test.logged) {
				t.Errorf("logged %q, want %q in it", log.String(), test.logged)
			}
		})
	}
	var log bytes.Buffer
	_, _ = sample(slog.New(slog.NewTextHandler(&log, nil))).Run(context.Background(), Request{Caller: Caller{Role: Lead}, Line: "crash"})
	if !strings.Contains(log.String(), "frame_test.go") {
		t.Error("the log has no stack of the panic")
	}
}

func TestTimeOfTheSite(t *testing.T) {
	newYork, err := time.LoadLocation("America/New_York")
	if err != nil {
		t.Fatal(err)
	}
	// 02:30 UTC on 2 July is 22:30 on 1 July in New York, which keeps UTC-4 then.
	at := time.Date(2013, 7, 2, 2, 30, 0, 0, time.UTC)
	tests := []struct {
		name  string
		req   Request
		zone  *time.Location
		today string
		clock string
	}{
		{"instant", Request{Now: at}, newYork, "2013-07-01", "2013-07-01T22:30:00-04:00"},
		{"instant, no zone", Request{Now: at}, nil, "2013-07-02", "2013-07-02T02:30:00Z"},
		{"site's clock", Request{Now: at, LocalClock: true}, newYork, "2013-07-02", "2013-07-02T02:30:00-04:00"},
		{"site's clock, no zone", Request{Now: at, LocalClock: true}, nil, "2013-07-02", "2013-07-02T02:30:00Z"},
	}
	for _, test := range tests {
		if got := test.req.TodayAt(test.zone).String(); got != test.today {
			t.Errorf("%s: today %s, want %s", test.name, got, test.today)
		}
		if got := test.req.NowAt(test.zone).Format(time.RFC3339); got != test.clock {
			t.Errorf("%s: now %s, want %s", test.name, got, test.clock)
		}
	}
}

func TestOpenGivesTheFile(t *testing.T) {
	call, err := sample(nil).ParseLine("/weather file my.csv")
	if err != nil {
		t.Fatal(err)
	}
	req := Request{Command: call.Command, Values: call.Values}
	if _, err := req.Open("file"); kindOf(err) != planner.Refused {
		t.Errorf("where there are no files: %v", err)
	}
	opened := ""
	req.OpenFile = func(name string) (io.ReadCloser, error) { opened = name; return nil, nil }
	if _, err := req.Open("file"); err != nil || opened != "my.csv" {
		t.Errorf("opened %q: %v", opened, err)
	}
	if _, err := req.Open("other"); kindOf(err) != planner.Missing {
		t.Errorf("an option not given: %v", err)
	}
}
