package command

import (
	"errors"
	"reflect"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

func TestParseLineReads(t *testing.T) {
	tests := []struct{ line, canonical string }{
		{"/due", "/due"},
		{"due", "/due"},
		{"  / DUE ", "/due"},
		{"/due greens regulator", "/due surface:greens work:regulator"},
		{"/due work:regulator greens", "/due surface:greens work:regulator"},
		{"/due regulator surface:greens", "/due surface:greens work:regulator"},
		{"/due Surface:Greens", "/due surface:Greens"},
		{`/due surface:"front  nine"`, `/due surface:"front nine"`},
		{`/due "front nine" feed`, `/due surface:"front nine" work:feed`},
		{"/due surface:“front nine”", `/due surface:"front nine"`},
		{`/due surface: greens work: "spring feed"`, `/due surface:greens work:"spring feed"`},
		{"/done greens,tees regulator,feed", "/done surfaces:greens,tees works:regulator,feed"},
		{"/done greens, tees regulator ,feed", "/done surfaces:greens,tees works:regulator,feed"},
		{`/done surfaces:"greens, front nine" works:feed`, `/done surfaces:"greens,front nine" works:feed`},
		{"/done greens feed 3 days ago 2.5 dry and windy", `/done surfaces:greens works:feed when:"3 days ago" rate:2.5 note:"dry and windy"`},
		{"/done greens feed when:4 Jun rate:+2", `/done surfaces:greens works:feed when:"4 jun" rate:2`},
		{"/done when:in 3 days greens feed", `/done surfaces:greens works:feed when:"in 3 days"`},
		{"/done when:mon greens feed", "/done surfaces:greens works:feed when:mon"},
		{`/done greens feed note:"say \"dry\" \\ C:\new"`, `/done surfaces:greens works:feed note:"say \"dry\" \\ C:\\new"`},
		{`/done greens feed note:C:\new`, `/done surfaces:greens works:feed note:C:\new`},
		{`/done greens feed note:"#7"`, `/done surfaces:greens works:feed note:#7`},
		{`/done greens feed note:""`, `/done surfaces:greens works:feed note:""`},
		{"/done greens feed note:\"two\nlines\x07\"", "/done surfaces:greens works:feed note:\"two\nlines\""},
		{"/whatif warmer:−1.5C", "/whatif warmer:-1.5c"},
		{"/whatif warmer:3 °F", "/whatif warmer:3f"},
		{"/whatif 3 f tomorrow 29 30, 28.5", "/whatif warmer:3f warm-from:tomorrow highs:29,30,28.5"},
		{"/whatif highs:29 30 28 keep:Y", "/whatif highs:29,30,28 keep:yes"},
		{"/whatif low:2° target:360F days:07 keep:false", "/whatif days:07 target:360f low:2 keep:no"},
		{"/help setup work add", `/help topic:"setup work add"`},
		{"/help growth potential", `/help topic:"growth potential"`},
		{"/setup work list", "/setup work list"},
		{"/Setup Work Add greens regulator Degree-Days base:10C season:1 mar", "/setup work add surface:greens name:regulator counts:degree-days base:10c season:03-01"},
		{"/weather file /home/me/my.csv", "/weather file file:/home/me/my.csv"},
		{"/due greens confirm:AB2C", "/due surface:greens"},
	}
	table := sample(nil)
	for _, test := range tests {
		call, err := table.ParseLine(test.line)
		if err != nil {
			t.Errorf("%s: %v", test.line, err)
			continue
		}
		if call.Line != test.canonical {
			t.Errorf("%s is read as\n  %s, want\n  %s", test.line, call.Line, test.canonical)
		}
		again, err := table.ParseLine(call.Line)
		if err != nil || again.Line != call.Line {
			t.Errorf("%s is read again as %s (%v)", call.Line, again.Line, err)
		}
	}
}

func TestParseLineRefuses(t *testing.T) {
	tests := []struct {
		line          string
		kind          planner.Kind
		message, hint string // parts of them
	}{
		{"", planner.Missing, "no command was given", "/help"},
		{" / ", planner.Missing, "no command was given", "/help"},
		{"/deu", planner.NotFound, "there is no command /deu", "/due"},
		{"/undo", planner.NotFound, "there is no command /undo", "/log undo"},
		{"/zzzzz", planner.NotFound, "there is no command /zzzzz", "Type /help"},
		{`"due"`, planner.Missing, "no command was given", "/help"},
		{"surface:greens", planner.Missing, "no command was given", "/help"},
		{"/setup", planner.Missing, "/setup is the beginning of a command", "Go on with one of: work. Like: /setup work"},
		{"/setup work", planner.Missing, "/setup work is the beginning of a command", "add, list"},
		{"/setup work ad x:1", planner.NotFound, `/setup work cannot be followed by "ad"`, "Use one of: add. Like: /setup work add"},
		{"/setup work frobnicate", planner.NotFound, `/setup work cannot be followed by "frobnicate"`, "add, list"},
		{"/due colour:red", planner.Invalid, `/due has no option "colour"`, "It takes surface, work. Like: /due"},
		{"/setup work list all:yes", planner.Invalid, `no option "all"`, "It takes none"},
		{"/setup work list all", planner.Invalid, `does not know what to do with "all"`, "no options"},
		{"/due greens regulator now", planner.Invalid, `does not know what to do with "now"`, "quotes"},
		{"/due surface:greens surface:tees", planner.Invalid, "surface is given twice", "surface:greens"},
		{"/due confirm:AAAA confirm:BBBB", planner.Invalid, "confirm is given twice", ""},
		{"/due confirm:", planner.Missing, "confirm: has no value", ""},
		{"/due surface: work:feed", planner.Missing, "surface: has no value", "a name"},
		{`/due surface:""`, planner.Missing, "surface: has no value", "a name"},
		{`/due surface:"front nine`, planner.Invalid, "is not closed", `\"`},
		{`/due surface:"front"nine`, planner.Invalid, "after the closing quote", "quotes"},
		{"/due surface:gr@@ns", planner.Invalid, `surface cannot be "gr@@ns"`, "letters, digits"},
		{"/done greens,,tees feed", planner.Invalid, `surfaces cannot be "greens,,tees"`, "commas"},
		{"/done greens,GREENS feed", planner.Invalid, `surfaces cannot be "greens,GREENS"`, "commas"},
		{"/done greens feed 31.02.2013", planner.Invalid, `when cannot be "31.02.2013"`, "2013-06-20"},
		{"/done greens feed when:2013-02-29", planner.Invalid, "when cannot be", "2013-06-20"},
		{"/done greens feed when:31 jun", planner.Invalid, "when cannot be", "4 jun"},
		{"/done greens feed when:1699-12-31", planner.Invalid, "when cannot be", "4 jun"},
		{"/done greens feed rate:2,5", planner.Invalid, `rate cannot be "2,5"`, "Write the number with a dot: rate:2.5"},
		{"/done greens feed rate:-1", planner.Invalid, "rate cannot be -1", "0 or more"},
		{"/done greens feed rate:NaN", planner.Invalid, "rate cannot be", "number"},
		{"/done greens feed rate:1e3", planner.Invalid, "rate cannot be", "number"},
		{"/done greens feed rate:Inf", planner.Invalid, "rate cannot be", "number"},
		{"/done greens feed rate:0x10", planner.Invalid, "rate cannot be", "number"},
		{"/done greens feed rate:9999999999999", planner.Invalid, "rate cannot be", "number"},
		{"/whatif days:2.5", planner.Invalid, `days cannot be "2.5"`, "a whole number, 1 to 60. Like: days:3"},
		{"/whatif days:61", planner.Invalid, "days cannot be 61", "1 to 60"},
		{"/whatif highs:29,warm", planner.Invalid, "highs cannot be", "numbers"},
		{"/whatif highs:,", planner.Invalid, "highs cannot be", "numbers"},
		{"/whatif highs:29,200", planner.Invalid, "highs cannot be 200", "-60 to 140"},
		{"/whatif warmer:c", planner.Invalid, `warmer cannot be "c"`, "degrees"},
		{"/whatif warmer:2k", planner.Invalid, `warmer cannot be "2k"`, "3f"},
		{"/whatif keep:perhaps", planner.Invalid, "keep cannot be", "yes or no"},
		{"/setup work add greens regulator weeks", planner.Invalid, `counts cannot be "weeks"`, "one of days, degree-days. Like: counts:days"},
		{"/setup work add target:-c", planner.Invalid, "target cannot be", "target takes a number (200, 200c or 360f). Like: target:200"},
		{"/setup work add greens season:02-30", planner.Invalid, "season cannot be", "03-01"},
		{"/setup work add surface:greens", planner.Missing, "still needed: name (its name), counts (by what it counts)",
			"Like: /setup work add surface:greens name:regulator counts:days"},
		{"/" + strings.Repeat("x", maxLine), planner.Invalid, "more than 4000 characters", "Shorten"},
	}
	for _, test := range tests {
		_, err := sample(nil).ParseLine(test.line)
		var problem *planner.Problem
		if !errors.As(err, &problem) {
			t.Errorf("%.60s: error %v, want a problem", test.line, err)
			continue
		}
		if problem.Kind != test.kind || !strings.Contains(problem.Message, test.message) || !strings.Contains(problem.Hint, test.hint) {
			t.Errorf("%.60s:\n got %s: %s | %s\nwant %s: %s | %s", test.line, problem.Kind, problem.Message, problem.Hint, test.kind, test.message, test.hint)
		}
	}
}

func TestMissingCarriesWhatAFormNeeds(t *testing.T) {
	_, err := sample(nil).ParseLine("/setup work add surface:greens target:360f")
	var needed *MissingOptions
	if !errors.As(err, &needed) {
		t.Fatalf("%v has no MissingOptions", err)
	}
	if needed.Command.Path != "setup work add" || needed.Line != "/setup work add surface:greens target:360f" ||
		len(needed.Options) != 2 || needed.Options[0].Name != "name" || needed.Options[1].Name != "counts" {
		t.Errorf("got %+v", needed)
	}
	if got, want := needed.Error(), "missing name, counts"; got != want {
		t.Errorf("error %q, want %q", got, want)
	}
}

func TestHandlersCanAskForAndRefuseOptions(t *testing.T) {
	call, err := sample(nil).ParseLine("/setup work add greens regulator degree-days")
	if err != nil {
		t.Fatal(err)
	}
	req := Request{Command: call.Command, Values: call.Values, Line: call.Line}
	var problem *planner.Problem
	if err := req.Missing("base"); !errors.As(err, &problem) || problem.Kind != planner.Missing ||
		problem.Hint != "Like: /setup work add surface:greens name:regulator counts:degree-days base:0" {
		t.Errorf("missing: %v %+v", err, problem)
	}
	if err := req.Invalid("base", "%d is too warm", 90); !errors.As(err, &problem) || problem.Message != "90 is too warm" ||
		problem.Hint != "base takes a temperature (29, 29c or 84f). Like: base:0" {
		t.Errorf("invalid: %v %+v", err, problem)
	}
	for _, err := range []error{Request{}.Missing("base"), Request{}.Invalid("base", "no"), req.Missing("nonsense"), req.Invalid("nonsense", "no")} {
		if !errors.As(err, &problem) {
			t.Errorf("%v is no problem", err)
		}
	}
}

func TestLineWith(t *testing.T) {
	call, err := sample(nil).ParseLine("/done greens feed yesterday note:dry")
	if err != nil {
		t.Fatal(err)
	}
	req := Request{Command: call.Command, Values: call.Values, Line: call.Line}
	tests := []struct{ name, value, want string }{
		{"when", "2013-06-19", "/done surfaces:greens works:feed when:2013-06-19 note:dry"},
		{"when", "", "/done surfaces:greens works:feed note:dry"},
		{"rate", "2.5", "/done surfaces:greens works:feed when:yesterday rate:2.5 note:dry"},
		{"extra", "x y", `/done surfaces:greens works:feed when:yesterday note:dry extra:"x y"`},
	}
	for _, test := range tests {
		if got := req.LineWith(test.name, test.value); got != test.want {
			t.Errorf("with %s %q: %s, want %s", test.name, test.value, got, test.want)
		}
	}
	if got := (Request{Line: "/due"}).LineWith("work", "feed"); got != "/due" {
		t.Errorf("without a command: %s", got)
	}
}

func TestValues(t *testing.T) {
	call, err := sample(nil).ParseLine(`/whatif warmer:-1.5f highs:29,30 days:7 target:200 low:2c keep:no warm-from:tomorrow`)
	if err != nil {
		t.Fatal(err)
	}
	v := call.Values
	if got, ok := v.Degrees("warmer"); !ok || got != (Degrees{-1.5, planner.Fahrenheit}) {
		t.Errorf("warmer %v %t", got, ok)
	}
	if got, ok := v.Degrees("target"); !ok || got != (Degrees{200, ""}) {
		t.Errorf("target %v %t", got, ok)
	}
	if got, ok := v.Degrees("low"); !ok || got != (Degrees{2, planner.Celsius}) {
		t.Errorf("low %v %t", got, ok)
	}
	if got, ok := v.Numbers("highs"); !ok || !slices.Equal(got, []float64{29, 30}) {
		t.Errorf("highs %v %t", got, ok)
	}
	if got, ok := v.Whole("days"); !ok || got != 7 {
		t.Errorf("days %v %t", got, ok)
	}
	if got, ok := v.Number("days"); !ok || got != 7 {
		t.Errorf("days as a number %v %t", got, ok)
	}
	if yes, ok := v.Yes("keep"); !ok || yes {
		t.Errorf("keep %v %t", yes, ok)
	}
	today := planner.DayOf(2013, 6, 20)
	if day, ok, err := v.Day("warm-from", today); !ok || err != nil || day != today+1 {
		t.Errorf("warm-from %v %t %v", day, ok, err)
	}
	if _, ok, err := v.Day("warm-from", planner.DayMax); !ok || kindOf(err) != planner.Invalid {
		t.Errorf("the day after the last one: given %t, error %v", ok, err)
	}
	if got, ok := v.Text("days"); !ok || got != "7" || !v.Has("days") {
		t.Errorf("days as text %q %t", got, ok)
	}
	// What was not given, or is of another kind, is not given.
	if _, ok := v.Number("warmer"); ok {
		t.Error("a warming is read as a plain number")
	}
	if _, ok, err := v.Day("highs", today); ok || err != nil {
		t.Error("numbers are read as a day")
	}
	if _, ok := (Values{}).Text("x"); ok || (Values{}).Has("x") {
		t.Error("no values, and one is given")
	}
	season, err := sample(nil).ParseLine("/setup work add greens feed days season:1 mar")
	if err != nil {
		t.Fatal(err)
	}
	if got, ok := season.Values.MonthDay("season"); !ok || got != (planner.MonthDay{Month: 3, Day: 1}) {
		t.Errorf("season %v %t", got, ok)
	}
	if got, ok := season.Values.Names("surface"); !ok || !slices.Equal(got, []string{"greens"}) {
		t.Errorf("a single name as a list: %q %t", got, ok)
	}
	names, err := sample(nil).ParseLine(`/done "front nine, greens" feed`)
	if err != nil {
		t.Fatal(err)
	}
	if got, ok := names.Values.Names("surfaces"); !ok || !slices.Equal(got, []string{"front nine", "greens"}) {
		t.Errorf("surfaces %q %t", got, ok)
	}
}

func TestReadDay(t *testing.T) {
	// 20 June 2013 was a Thursday.
	const thursday = "2013-06-20"
	tests := []struct{ text, today, past, next string }{
		{"2013-06-04", thursday, "2013-06-04", "2013-06-04"},
		{"today", thursday, "2013-06-20", "2013-06-20"},
		{"Yesterday", thursday, "2013-06-19", "2013-06-19"},
		{"tomorrow", thursday, "2013-06-21", "2013-06-21"},
		{"in 1 day", thursday, "2013-06-21", "2013-06-21"},
		{"in  3 days", thursday, "2013-06-23", "2013-06-23"},
		{"in 2 weeks", thursday, "2013-07-04", "2013-07-04"},
		{"3 days ago", thursday, "2013-06-17", "2013-06-17"},
		{"1 week ago", thursday, "2013-06-13", "2013-06-13"},
		{"thu", thursday, "2013-06-20", "2013-06-20"},
		{"wed", thursday, "2013-06-19", "2013-06-26"},
		{"Fri", thursday, "2013-06-14", "2013-06-21"},
		{"tues", thursday, "2013-06-18", "2013-06-25"},
		{"saturday", thursday, "2013-06-15", "2013-06-22"},
		{"4 jun", thursday, "2013-06-04", "2013-06-04"},
		{"20 jun", thursday, "2013-06-20", "2013-06-20"},
		{"Jun 21", thursday, "2013-06-21", "2013-06-21"},
		{"1 sept", thursday, "2013-09-01", "2013-09-01"},
		{"4 june 2011", thursday, "2011-06-04", "2011-06-04"},
		{"29 feb", thursday, "2012-02-29", "2012-02-29"},
		{"29 feb", "1900-06-01", "1904-02-29", "1904-02-29"}, // 1900 was no leap year
		{"2 jul", "2013-07-01", "2013-07-02", "2013-07-02"},
		{"30 dec", "2013-01-02", "2012-12-30", "2012-12-30"},
		{"2 jul", "2013-01-01", "2013-07-02", "2013-07-02"}, // 182 days ahead, 183 back
		{"1 mar", "2011-08-31", "2011-03-01", "2012-03-01"}, // 184 days back, 183 ahead in a leap year
		{"1.7.2013", thursday, "2013-07-01", "2013-07-01"},
		{"04.06.2013", thursday, "2013-06-04", "2013-06-04"},
		{"4.6.", thursday, "2013-06-04", "2013-06-04"},
		{"2013-7-1", thursday, "2013-07-01", "2013-07-01"},
		{"2013/7/1", thursday, "2013-07-01", "2013-07-01"},
		{"Thu 20 Jun", thursday, "2013-06-20", "2013-06-20"},
		{"tuesday, jun 4 2013", thursday, "2013-06-04", "2013-06-04"},
		{"June 4th, 2013", thursday, "2013-06-04", "2013-06-04"},
		{"1st of july", thursday, "2013-07-01", "2013-07-01"},
		{"31 dec", "2013-01-01", "2012-12-31", "2012-12-31"},
	}
	for _, test := range tests {
		words, ok := readDay(test.text)
		if !ok {
			t.Errorf("%s is not read", test.text)
			continue
		}
		today, err := planner.ParseDay(test.today)
		if err != nil {
			t.Fatal(err)
		}
		if got, ok := words.on(today, true); !ok || got.String() != test.past {
			t.Errorf("%s past on %s: %s %t, want %s", test.text, today, got, ok, test.past)
		}
		if got, ok := words.on(today, false); !ok || got.String() != test.next {
			t.Errorf("%s next on %s: %s %t, want %s", test.text, today, got, ok, test.next)
		}
	}
	for _, text := range []string{"", "4", "jun", "4/6", "4/6/2013", "4.6", "31.6.2013", "2013-13-1", "2013-0-1", "mon today", "mon 4", "mon tue", "xyz 4 jun", "mo", "sundays", "monday week", "in days", "3 days",
		"in -3 days", "in 123456 days", "0 jun", "32 jan", "30 feb", "29 feb 2013", "4 jun 1699", "4 jun 13", "next mon"} {
		if words, ok := readDay(text); ok {
			t.Errorf("%q is read as %+v", text, words)
		}
	}
}

func TestReadMonthDay(t *testing.T) {
	for text, want := range map[string]string{"03-01": "03-01", "1 mar": "03-01", "Mar 1": "03-01", "29 feb": "02-29"} {
		if got, ok := readMonthDay(strings.ToLower(text)); !ok || got.String() != want {
			t.Errorf("%s is read as %s %t, want %s", text, got, ok, want)
		}
	}
	for _, text := range []string{"", "13-01", "02-30", "1 mar 2013", "today", "mon"} {
		if got, ok := readMonthDay(text); ok {
			t.Errorf("%q is read as %s", text, got)
		}
	}
}

func TestWithoutComment(t *testing.T) {
	tests := []struct{ line, want string }{
		{"# all of it", ""},
		{"  /due greens # the greens", "/due greens"},
		{"/due\t#x", "/due"},
		{`/done note:"dry # not wet" # wet`, `/done note:"dry # not wet"`},
		{"/done note:#7", "/done note:#7"},
		{"/done note:a#7", "/done note:a#7"},
		{`/done "#7" x`, `/done "#7" x`},
		{`/done # an "open quote`, "/done"},
		{`/done note:"open # quote`, `/done note:"open # quote`},
		{"", ""},
	}
	for _, test := range tests {
		if got := WithoutComment(test.line); got != test.want {
			t.Errorf("%q without comment is %q, want %q", test.line, got, test.want)
		}
	}
}

func TestNearest(t *testing.T) {
	// Distances are those of optimal string alignment, worked out by hand.
	for _, test := range []struct {
		a, b string
		want int
	}{{"due", "due", 0}, {"deu", "due", 1}, {"doone", "done", 1}, {"ca", "abc", 3}, {"", "due", 3}, {"°", "c", 1}} {
		if got := distance(test.a, test.b); got != test.want {
			t.Errorf("%q to %q is %d, want %d", test.a, test.b, got, test.want)
		}
	}
	if got := nearest("brief", []string{"briefing", "due"}); !slices.Equal(got, []string{"briefing"}) {
		t.Errorf("near brief: %v", got)
	}
}

// Line and ParseLine are inverse on every text that a value can hold.
func TestLineRoundTrip(t *testing.T) {
	table := sample(nil)
	rapid.Check(t, func(t *rapid.T) {
		note := clean(rapid.OneOf(rapid.String(), rapid.StringOf(rapid.SampledFrom([]rune(`ab "\“”:#/ ,`)))).Draw(t, "note"))
		line := Line("done", Pair{"surfaces", "front nine,tees"}, Pair{"works", "feed"}, Pair{"note", note})
		call, err := table.ParseLine(line)
		if err != nil {
			t.Fatalf("%s: %v", line, err)
		}
		if got, given := call.Values.Text("note"); !given || got != note {
			t.Fatalf("%s gives %q, want %q", line, got, note)
		}
		if call.Line != line {
			t.Fatalf("canonical %s of %s", call.Line, line)
		}
	})
}

func FuzzParseLine(f *testing.F) {
	for _, seed := range []string{"/due greens regulator", `/done greens "front nine" when:3 days ago note:"a \"b\" \\"`, "/whatif 3 f 29 30,28 keep:y",
		"/setup work add season:1 mar base:-0", "/due surface:“a b”", `/due "`, "/help # x", "due surface: \x00\xff", "whatif highs:29 30, warmer: 2 c"} {
		f.Add(seed)
	}
	f.Add(strings.Repeat("x", maxLine)) // was slow to compare with every command
	f.Add("/whatif highs:" + strings.Repeat("1 ", maxLine/3))
	table := sample(nil)
	f.Fuzz(func(t *testing.T, line string) {
		WithoutComment(line)
		call, err := table.ParseLine(line)
		if err != nil {
			var problem *planner.Problem
			if !errors.As(err, &problem) || problem.Message == "" {
				t.Fatalf("%q: %v is no problem with a message", line, err)
			}
			return
		}
		again, err := table.ParseLine(call.Line)
		if err != nil {
			t.Fatalf("%q: its canonical line %q: %v", line, call.Line, err)
		}
		if again.Line != call.Line || !reflect.DeepEqual(again.Values, call.Values) {
			t.Fatalf("%q: canonical %q is read again as %q", line, call.Line, again.Line)
		}
	})
}
