package command

import (
	"context"
	"errors"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// The 12-hour clock: 12 am is midnight, 12 pm noon (usage of the US Naval
// Observatory and NIST, from memory).
func TestReadClock(t *testing.T) {
	for _, test := range []struct{ text, clock string }{
		{"06:10", "06:10"}, {"6:10", "06:10"}, {"0610", "06:10"}, {"06.10", "06:10"}, {"6.10", "06:10"}, {"23:59", "23:59"}, {"0:05", "00:05"},
		{"5am", "05:00"}, {"5 AM", "05:00"}, {"5:00pm", "17:00"}, {"6:10 pm", "18:10"}, {"6.10pm", "18:10"}, {"610pm", "18:10"}, {"5 p.m.", "17:00"},
		{"12am", "00:00"}, {"12pm", "12:00"}, {"12:30am", "00:30"}, {"11pm", "23:00"},
		{"5", ""}, {"24:00", ""}, {"2400", ""}, {"06:60", ""}, {"0660", ""}, {"610", ""}, {"6.1", ""}, {"2.5", ""}, {"13pm", ""}, {"0am", ""},
		{"06:1", ""}, {"06:10:30", ""}, {"am", ""}, {"", ""}, {"-6:10", ""}, {"5 in the morning", ""},
	} {
		clock, ok := readClock(test.text)
		if clock != test.clock || ok != (test.clock != "") {
			t.Errorf("%q is %q %t, want %q", test.text, clock, ok, test.clock)
		}
	}
}

func TestCutClock(t *testing.T) {
	for _, test := range []struct{ text, day, clock string }{
		{"today 06:10", "today", "06:10"},
		{"Today 5am", "today", "05:00"},
		{"yesterday at 6:10 pm", "yesterday", "18:10"},
		{"5:00pm", "today", "17:00"},
		{"monday 1 july 2013, 6:10pm", "monday 1 july 2013", "18:10"},
		{"0610", "today", "06:10"},
		{"at 5am", "today", "05:00"},
		{"2013-06-20t06:10", "2013-06-20", "06:10"},
		{"3 days ago 06.10", "3 days ago", "06:10"},
		{"1 jul 0610", "1 jul", "06:10"},
		{"1.7.2013 06.10", "1.7.2013", "06:10"},
		{"mon 1 jul 2013 6:10 pm", "mon 1 jul 2013", "18:10"},
		{"4 jun 2013", "4 jun 2013", ""}, // a year, not 20:13
		{"4 jun 1999", "4 jun 1999", ""},
		{"4 jun 1830", "4 jun", "18:30"}, // nobody logs the year 1830
		{"jun 4", "jun 4", ""},
		{"2013-06-20", "2013-06-20", ""},
		{"1.7.2013", "1.7.2013", ""},
		{"today 2.50", "today 2.50", ""}, // a rate
		{"sat", "sat", ""},
		{"", "", ""},
	} {
		if day, clock := cutClock(test.text); day != test.day || clock != test.clock {
			t.Errorf("%q is %q %q, want %q %q", test.text, day, clock, test.day, test.clock)
		}
	}
}

// What every clock and every date of ours prints is read back.
func TestPrintedDaysAndClocksAreReadBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		day := planner.Day(rapid.Int32Range(int32(planner.DayMin)+800, int32(planner.DayMax)-800).Draw(t, "day"))
		today := day + planner.Day(rapid.Int32Range(-150, 150).Draw(t, "away"))
		past := rapid.Bool().Draw(t, "past")
		for _, text := range []string{day.String(), day.Short(), shortOn(day, today), day.String()[:4] + strings.ReplaceAll(day.String()[4:], "-0", "-")} {
			words, ok := readDay(text)
			if got, keep := words.on(today, past); !ok || !keep || got != day || words.misfit(got) != nil {
				t.Fatalf("%s of %s, seen on %s, is read as %s %t %v", text, day, today, got, ok, words.misfit(got))
			}
		}
		minute := rapid.IntRange(0, 24*60-1).Draw(t, "minute")
		at := planner.ClockOf(minute)
		if clock, ok := readClock(at); !ok || clock != at {
			t.Fatalf("%s is read as %q %t", at, clock, ok)
		}
	})
}

func TestShortOn(t *testing.T) {
	today := planner.DayOf(2013, 7, 1)
	for day, want := range map[planner.Day]string{today + 1: "Tue 2 Jul", today - 364: "Mon 2 Jul 2012", planner.DayOf(2014, 1, 1): "Wed 1 Jan 2014"} {
		if got := shortOn(day, today); got != want {
			t.Errorf("%s is %q, want %q", day, got, want)
		}
	}
}

// refused gives the problem of a line of the sample table.
func refused(t *testing.T, line string) *planner.Problem {
	t.Helper()
	call, err := sample(nil).ParseLine(line)
	var problem *planner.Problem
	if !errors.As(err, &problem) {
		t.Fatalf("%s: no problem but %s, %v", line, call.Line, err)
	}
	return problem
}

func TestWhatPeopleTypeIsAnswered(t *testing.T) {
	for _, test := range []struct{ line, message, hint string }{
		{"/done greens feed when:1/7", "1/7: 1 Jul or 7 Jan?", `Write when:"1 jul" or when:"7 jan".`},
		{"/done greens feed when:1/7/2013", "1/7/2013: 1 Jul 2013 or 7 Jan 2013?", `Write when:"1 jul 2013" or when:"7 jan 2013".`},
		{"/done greens feed when:6/28", "6/28: 28 Jun?", `Write when:"28 jun".`},
		{"/done greens feed when:4/4", "4/4: 4 Apr?", `Write when:"4 apr".`},
		{"/setup work add greens feed days season:3/1", "3/1: 3 Jan or 1 Mar?", `Write season:"3 jan" or season:"1 mar".`},
		{"/done greens feed when:4.6", "4.6: 4 Jun?", `Write when:"4 jun".`},
		{"/done greens feed when:1.17", `when cannot be "1.17"`, "2013-06-20"},
		{"/whatif highs:29,5", "highs: is 29,5 one number or several?", `One: write 29.5 with a dot, highs:29.5. Several: highs:"29 5".`},
		{"/done greens feed when:31/31", `when cannot be "31/31"`, "2013-06-20"},
		{`/whatif highs:"29,5 30,5"`, "highs: is 29,5 one number or several?", `One: write 29.5 with a dot, highs:"29.5 30.5". Several: highs:"29 5 30 5".`},
		{"/whatif highs:29,5 30,5", "highs: is 29,5 one number or several?", "29.5 with a dot"},
		{`/whatif highs:"29,5; 30"`, "highs: is 29,5 one number or several?", `highs:"29.5 30"`},
		{`/whatif highs:"29,5, 30,5"`, "highs: is 29,5 one number or several?", `highs:"29.5 30.5"`},
		{"/whatif warmer:2,5", `warmer cannot be "2,5"`, "Write the number with a dot: warmer:2.5"},
		{"/whatif warmer:-2,5c", `warmer cannot be "-2,5c"`, "warmer:-2.5c"},
		{"/whatif low:17,5", `low cannot be "17,5"`, "low:17.5"},
		{"/whatif target:1,000", `target cannot be "1,000"`, "Write target:1000 for thousands, or target:1.000 with a dot."},
		{"/whatif days:2,5", `days cannot be "2,5"`, "days:2.5"},
		{"/done greens feed note:short of product", "note: a value of several words stands in quotes", `Put it in quotes: note:"short of product"`},
		{"/done greens feed note:short of product rate:2", "note: a value of several words stands in quotes", `note:"short of product"`},
		{"/done greens feed note:two today of them", "note: a value of several words stands in quotes", `note:"two today of them"`},
		{"/done greens feed rate=2", `"rate=2" is not read`, "Between an option and its value stands a colon. Write rate:2"},
		{"/done greens feed Note=dry", `"Note=dry" is not read`, "Write note:dry"},
		{`/done greens feed note="dry and windy"`, `"note=\"dry" is not read`, "Write note:dry"},
		{"/whatif warm:2", "warm: could be warmer: or warm-from:", "Write one of them out. Like: warmer:2"},
		{"/due surfaces:greens", `/due has no option "surfaces"`, "Perhaps you mean surface:"},
		{`/weather file C:\week.csv`, `no option "c"`, "It takes file"},
	} {
		problem := refused(t, test.line)
		if !strings.Contains(problem.Message, test.message) || !strings.Contains(problem.Hint, test.hint) {
			t.Errorf("%s:\n got %s | %s\nwant %s | %s", test.line, problem.Message, problem.Hint, test.message, test.hint)
		}
	}
}

func TestWhatPeopleTypeIsRead(t *testing.T) {
	for _, test := range []struct{ line, canonical string }{
		{"/done surf:greens work:feed", "/done surfaces:greens works:feed"},
		{"/due surf:greens wo:feed", "/due surface:greens work:feed"},
		{"/done greens feed when:Thu 20 Jun", `/done surfaces:greens works:feed when:"thu 20 jun"`},
		{"/done greens feed Thu, 20 Jun 2013 2.5", `/done surfaces:greens works:feed when:"thu, 20 jun 2013" rate:2.5`},
		{`/whatif highs:"29 5"`, `/whatif highs:"29, 5"`},
		{"/whatif highs:29,30", "/whatif highs:29,30"},
		{"/whatif highs:29,5,28", "/whatif highs:29,5,28"},
		{"/whatif highs:29,30,28", "/whatif highs:29,30,28"},
		{`/whatif highs:"29 30 28"`, "/whatif highs:29,30,28"},
		{`/whatif highs:"29, 30, 28.5"`, "/whatif highs:29,30,28.5"},
		{`/whatif highs:"29 , 30"`, "/whatif highs:29,30"},
		{"/done greens feed note:dry yesterday", "/done surfaces:greens works:feed when:yesterday note:dry"},
		{"/done note:dry greens feed", "/done surfaces:greens works:feed note:dry"},
		{"/help a=b", "/help topic:a=b"},
		{`/done greens feed note:"rate=2"`, "/done surfaces:greens works:feed note:rate=2"},
	} {
		call, err := sample(nil).ParseLine(test.line)
		if err != nil || call.Line != test.canonical {
			t.Errorf("%s is read as\n  %s (%v), want\n  %s", test.line, call.Line, err, test.canonical)
		}
	}
}

// A weekday that was typed with a date is believed only when it fits.
func TestWeekdayMustFit(t *testing.T) {
	today := planner.DayOf(2013, 7, 1) // a Monday
	for text, want := range map[string]string{
		"mon 1 jul": "", "tue 2 jul 2013": "", "Fri, 28 Jun": "",
		"tue 1 jul":      "1 Jul 2013 is a Monday, not a Tuesday",
		"mon 1 jul 2012": "1 Jul 2012 is a Sunday, not a Monday",
	} {
		call, err := sample(nil).ParseLine(Line("done", Pair{"surfaces", "greens"}, Pair{"works", "feed"}, Pair{"when", text}))
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		_, given, err := call.Values.Day("when", today)
		if message := ""; given {
			if err != nil {
				message = err.Error()
			}
			if !strings.HasPrefix(message, want) || (message == "") != (want == "") {
				t.Errorf("%s: %q, want %q", text, message, want)
			}
		}
	}
}

// Tab goes on behind a name that is cut short.
func TestCompleteCutName(t *testing.T) {
	table := sample(nil)
	got := table.Complete(context.Background(), Request{Caller: Caller{Role: Lead}}, "/done surf:gr")
	if len(got) != 1 || got[0] != "/done surfaces:Greens " {
		t.Errorf("got %q", got)
	}
}

// Whatever is missing of a command of ours, the line that the problem shows is
// read when it is pasted, and names what was given only once.
func TestStillNeededParses(t *testing.T) {
	table := Desk{}.Table(nil)
	for _, command := range table.All() {
		var names []string
		for _, option := range command.Options {
			names = append(names, option.Name)
		}
		for i := range command.Options {
			option := &command.Options[i]
			read, err := option.read(option.example())
			if err != nil {
				t.Fatal(err)
			}
			req := Request{Command: command, Values: Values{map[string]value{option.Name: read}}}
			var problem *planner.Problem
			if !errors.As(req.Missing(option.Name), &problem) || !strings.Contains(problem.Message, option.Name) {
				t.Errorf("/%s: a %s that does not do: %v", command.Path, option.Name, problem)
			}
			if line, _ := strings.CutPrefix(problem.Hint, "Like: "); strings.Count(line, " "+option.Name+":") != 1 {
				t.Errorf("/%s: a %s that does not do: %s", command.Path, option.Name, line)
			}
			if len(names) == 1 {
				continue
			}
			if !errors.As(req.Missing(names...), &problem) {
				t.Fatalf("/%s: no problem", command.Path)
			}
			if strings.Contains(problem.Message, " "+option.Name+" (") {
				t.Errorf("/%s with %s asks for it again: %s", command.Path, option.Name, problem.Message)
			}
			line, _ := strings.CutPrefix(problem.Hint, "Like: ")
			if _, err := table.ParseLine(line); err != nil {
				t.Errorf("%s: %v", line, err)
			}
		}
	}
}

func FuzzReadDay(f *testing.F) {
	for _, seed := range []string{"mon 1 jul", "1.7.2013", "2013-7-1", "6/28", "today at 6:10 pm", "0610", "1 jul 1830", "4 jun, 2013", "in 3 days 5am"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		option := Option{Name: "when", Kind: Day, Clock: true}
		read, err := option.read(text)
		if err != nil {
			var problem *planner.Problem
			if !errors.As(err, &problem) || problem.Message == "" || problem.Hint == "" {
				t.Fatalf("%q: %v says nothing", text, err)
			}
			return
		}
		if _, ok := readClock(read.clock); read.clock != "" && !ok {
			t.Fatalf("%q has the time %q", text, read.clock)
		}
		again, err := option.read(read.text)
		if err != nil || again.day != read.day || again.clock != read.clock || again.text != read.text {
			t.Fatalf("%q is %q, read again as %q (%v)", text, read.text, again.text, err)
		}
		if day, ok := read.day.on(planner.DayOf(2013, 7, 1), true); ok && !keepable(day) {
			t.Fatalf("%q is %d", text, day)
		}
	})
}
