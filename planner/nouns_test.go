package planner_test

import (
	"errors"
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/planner"
)

func TestDated(t *testing.T) {
	var none planner.Dated[int]
	if none.On(0) != 0 {
		t.Errorf("no value holds %d", none.On(0))
	}
	if always := planner.Always(7); always.On(planner.DayMin) != 7 || always.On(planner.DayMax) != 7 {
		t.Errorf("always 7 holds %d", always.On(0))
	}
	setting := none.With(20, 2).With(10, 1).With(30, 3).With(20, 22) // added out of order
	for day, want := range map[planner.Day]int{planner.DayMin: 1, 9: 1, 10: 1, 19: 1, 20: 22, 29: 22, 30: 3, planner.DayMax: 3} {
		if got := setting.On(day); got != want {
			t.Errorf("on day %d: %d, want %d", day, got, want)
		}
	}
	if len(setting) != 4 {
		t.Errorf("%+v: values are added, never replaced", setting)
	}
}

// With changes no setting it is asked of, and On finds the newest that holds.
func TestDatedAgainstALoop(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		days := rapid.SliceOfN(rapid.IntRange(-5, 5), 1, 8).Draw(t, "days")
		var setting planner.Dated[int]
		for i, day := range days {
			before := slices.Clone(setting)
			next := setting.With(planner.Day(day), i)
			if !reflect.DeepEqual(setting, before) {
				t.Fatalf("%v became %v", before, setting)
			}
			setting = next
		}
		for day := planner.Day(-6); day <= 6; day++ {
			want, from := -1, planner.DayMin
			for i, start := range days { // later added, of those that hold, the newest day
				if planner.Day(start) <= day && planner.Day(start) >= from {
					want, from = i, planner.Day(start)
				}
			}
			if want < 0 { // before the first one's day the first holds
				earliest := slices.Min(days)
				want = slices.Index(days, earliest)
			}
			if got := setting.On(day); got != want {
				t.Fatalf("%v on %d: %d, want %d", setting, day, got, want)
			}
		}
	})
}

func TestLocation(t *testing.T) {
	for _, name := range []string{"America/New_York", "Europe/Dublin", "UTC"} {
		if zone, err := (planner.Site{Zone: name}).Location(); err != nil || zone.String() != name {
			t.Errorf("%s: %v, %v", name, zone, err)
		}
	}
	// "" and "Local" would be whatever the machine is set to.
	for _, name := range []string{"", "Local", "Mars/Base", "../etc/passwd", "EST5EDT6"} {
		_, err := (planner.Site{Zone: name}).Location()
		wantKind(t, "zone "+name, err, planner.Invalid)
	}
}

// checked runs rows that each spoil one thing of a noun that is good.
func checked[N planner.Noun](t *testing.T, good func() N, spoil map[string]func(*N)) {
	t.Helper()
	if err := good().Check(); err != nil {
		t.Fatalf("the good %s: %v", good().Kind(), err)
	}
	for what, change := range spoil {
		bad := good()
		change(&bad)
		wantKind(t, bad.Kind()+": "+what, bad.Check(), planner.Invalid)
	}
}

func TestSiteCheck(t *testing.T) {
	checked(t, quillmere, map[string]func(*planner.Site){
		"no name":          func(s *planner.Site) { s.Name = "" },
		"bad name":         func(s *planner.Site) { s.Name = "a/b" },
		"too far north":    func(s *planner.Site) { s.Lat = 90.1 },
		"too far south":    func(s *planner.Site) { s.Lat = -90.1 },
		"no latitude":      func(s *planner.Site) { s.Lat = math.NaN() },
		"too far east":     func(s *planner.Site) { s.Lon = 180.1 },
		"no longitude":     func(s *planner.Site) { s.Lon = math.NaN() },
		"endless":          func(s *planner.Site) { s.Lon = math.Inf(-1) },
		"no units":         func(s *planner.Site) { s.Units = "" },
		"odd units":        func(s *planner.Site) { s.Units = "K" },
		"no zone":          func(s *planner.Site) { s.Zone = "" },
		"no such zone":     func(s *planner.Site) { s.Zone = "America/Quillmere" },
		"no day rule":      func(s *planner.Site) { s.Rules = nil },
		"a bad day rule":   func(s *planner.Site) { s.Rules = planner.Always(planner.DayRule{Boundary: "noon"}) },
		"a later bad rule": func(s *planner.Site) { s.Rules = s.Rules.With(9, planner.DayRule{}) },
	})
}

func TestStationCheck(t *testing.T) {
	checked(t, func() planner.Station { return planner.Station{Site: 1, Name: "roof", Rank: 1} }, map[string]func(*planner.Station){
		"no site":      func(s *planner.Station) { s.Site = 0 },
		"no rank":      func(s *planner.Station) { s.Rank = 0 },
		"a rank below": func(s *planner.Station) { s.Rank = -1 },
		"no name":      func(s *planner.Station) { s.Name = "" },
	})
}

func TestSurfaceCheck(t *testing.T) {
	with := func(change func(*planner.Turf)) func(*planner.Surface) {
		return func(s *planner.Surface) {
			turf := s.Turf[0].Value
			change(&turf)
			s.Turf = s.Turf.With(9, turf) // a later value counts as much
		}
	}
	good := func() planner.Surface {
		return planner.Surface{Site: 1, Name: "greens", Turf: planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 3})}
	}
	checked(t, good, map[string]func(*planner.Surface){
		"no site":          func(s *planner.Surface) { s.Site = 0 },
		"no turf":          func(s *planner.Surface) { s.Turf = nil },
		"no name":          func(s *planner.Surface) { s.Name = "" },
		"a flat curve":     with(func(t *planner.Turf) { t.Curve.WidthC = 0 }),
		"no optimum":       with(func(t *planner.Turf) { t.Curve.OptimumC = math.NaN() }),
		"a ceiling below":  with(func(t *planner.Turf) { t.CeilingGM2 = -0.1 }),
		"a ceiling beyond": with(func(t *planner.Turf) { t.CeilingGM2 = 20.1 }),
		"no ceiling":       with(func(t *planner.Turf) { t.CeilingGM2 = math.NaN() }),
	})
	bare := good()
	bare.Turf[0].Value.CeilingGM2 = 0
	if err := bare.Check(); err != nil {
		t.Errorf("a ceiling that was not said: %v", err)
	}
}

func TestWorkCheck(t *testing.T) {
	with := func(change func(*planner.WorkSettings)) func(*planner.Work) {
		return func(w *planner.Work) {
			settings := w.Settings[0].Value
			change(&settings)
			w.Settings = planner.Always(settings)
		}
	}
	good := func() planner.Work { return regulator(200) }
	checked(t, good, map[string]func(*planner.Work){
		"no surface":       func(w *planner.Work) { w.Surface = 0 },
		"no settings":      func(w *planner.Work) { w.Settings = nil },
		"no name":          func(w *planner.Work) { w.Name = "" },
		"counts nothing":   with(func(s *planner.WorkSettings) { s.Counts = "" }),
		"odd method":       with(func(s *planner.WorkSettings) { s.Method = "guess" }),
		"no base":          with(func(s *planner.WorkSettings) { s.Thresholds.LowerC = math.NaN() }),
		"target 0":         with(func(s *planner.WorkSettings) { s.Target = 0 }),
		"target below":     with(func(s *planner.WorkSettings) { s.Target = -1 }),
		"target beyond":    with(func(s *planner.WorkSettings) { s.Target = 100001 }),
		"no target":        with(func(s *planner.WorkSettings) { s.Target = math.NaN() }),
		"latest before":    with(func(s *planner.WorkSettings) { s.Latest = 199 }),
		"latest beyond":    with(func(s *planner.WorkSettings) { s.Latest = math.Inf(1) }),
		"latest no number": with(func(s *planner.WorkSettings) { s.Latest = math.NaN() }),
		"odd mean":         with(func(s *planner.WorkSettings) { s.Basis = planner.Extremes }),
		"reserve below":    with(func(s *planner.WorkSettings) { s.Counts, s.Target = planner.ByNitrogen, -0.1 }),
		"reserve beyond":   with(func(s *planner.WorkSettings) { s.Counts, s.Target = planner.ByNitrogen, 50.1 }),
		"no reserve":       with(func(s *planner.WorkSettings) { s.Counts, s.Target = planner.ByNitrogen, math.NaN() }),
	})
	for name, change := range map[string]func(*planner.Work){
		"no mean yet":          with(func(s *planner.WorkSettings) { s.Basis = "" }),
		"latest at the target": with(func(s *planner.WorkSettings) { s.Latest = 200 }),
		"a reserve of 0":       with(func(s *planner.WorkSettings) { s.Counts, s.Target = planner.ByNitrogen, 0 }),
		"days":                 with(func(s *planner.WorkSettings) { s.Counts, s.Target = planner.ByDays, 14 }),
	} {
		work := good()
		change(&work)
		if err := work.Check(); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestTotalCheck(t *testing.T) {
	with := func(change func(*planner.TotalSettings)) func(*planner.Total) {
		return func(total *planner.Total) {
			settings := total.Settings[0].Value
			change(&settings)
			total.Settings = planner.Always(settings)
		}
	}
	start := func(month time.Month, day int) func(*planner.Total) {
		return with(func(s *planner.TotalSettings) { s.Start = planner.MonthDay{Month: month, Day: day} })
	}
	good := func() planner.Total { return totalFrom(planner.MonthDay{Month: time.February, Day: 29}) }
	checked(t, good, map[string]func(*planner.Total){
		"no site":          func(total *planner.Total) { total.Site = 0 },
		"no settings":      func(total *planner.Total) { total.Settings = nil },
		"no name":          func(total *planner.Total) { total.Name = "" },
		"days":             with(func(s *planner.TotalSettings) { s.Counts = planner.ByDays }),
		"nitrogen":         with(func(s *planner.TotalSettings) { s.Counts = planner.ByNitrogen }),
		"no measure":       with(func(s *planner.TotalSettings) { s.Counts = "" }),
		"no base":          with(func(s *planner.TotalSettings) { s.Thresholds.LowerC = math.Inf(1) }),
		"growth, no curve": with(func(s *planner.TotalSettings) { s.Counts = planner.ByGrowthDays }),
		"no start":         start(0, 0),
		"30 February":      start(time.February, 30),
		"month 13":         start(13, 1),
		"day 0":            start(time.March, 0),
	})
}

func TestEntryCheck(t *testing.T) {
	checked(t, func() planner.Entry { return done(0, 1, 5) }, map[string]func(*planner.Entry){
		"no site":        func(e *planner.Entry) { e.Site = 0 },
		"no work":        func(e *planner.Entry) { e.Passes = nil },
		"work 0":         func(e *planner.Entry) { e.Passes = []planner.Pass{{}} },
		"day too early":  func(e *planner.Entry) { e.Day = planner.DayMin - 1 },
		"day too late":   func(e *planner.Entry) { e.Day = planner.DayMax + 1 },
		"much nitrogen":  func(e *planner.Entry) { e.Passes[0].NitrogenGM2 = 50.01 },
		"nitrogen below": func(e *planner.Entry) { e.Passes[0].NitrogenGM2 = -0.01 },
		"no number":      func(e *planner.Entry) { e.Passes[0].NitrogenGM2 = math.NaN() },
		"the second of two": func(e *planner.Entry) {
			e.Passes = append(e.Passes, planner.Pass{Work: 2, NitrogenGM2: 210})
		},
	})
	entry := done(3, 7, 1)
	if pass, ok := entry.Of(7); !ok || pass.NitrogenGM2 != 1 {
		t.Errorf("work 7 in %+v is %+v", entry, pass)
	}
	if _, ok := entry.Of(8); ok {
		t.Error("an entry of work 7 has work 8")
	}
}

func TestKindsAndKeys(t *testing.T) {
	var got []string
	for _, noun := range []planner.Noun{
		planner.Site{ID: 1}, planner.Station{ID: 2}, planner.Surface{ID: 3}, planner.Work{ID: 4}, planner.Total{ID: 5}, planner.Entry{ID: 6}, planner.Closed{ID: 7},
	} {
		got = append(got, fmt.Sprint(noun.Kind(), noun.Key()))
	}
	if want := "site1 station2 surface3 work4 total5 entry6 closed7"; strings.Join(got, " ") != want {
		t.Errorf("%v, want %s", got, want)
	}
}

func TestProblem(t *testing.T) {
	cause := errors.New("deep down")
	first := planner.Problemf(planner.Taken, "the name %q is in use", "greens")
	full := first.WithHint("choose %d others", 2).WithCause(cause)
	if full.Error() != `the name "greens" is in use` || full.Hint != "choose 2 others" || !errors.Is(full, cause) {
		t.Errorf("%+v", full)
	}
	if first.Hint != "" || first.Cause != nil {
		t.Errorf("the problem it was made from became %+v", first)
	}
	for _, row := range []struct {
		err  error
		want planner.Kind
	}{
		{full, planner.Taken},
		{fmt.Errorf("keep the surface: %w", full), planner.Taken},
		{errors.Join(full, cause), planner.Taken},
		{cause, planner.Internal},
		{nil, planner.Internal},
	} {
		if got := planner.KindOf(row.err); got != row.want {
			t.Errorf("%v is a %s problem, want %s", row.err, got, row.want)
		}
	}
}
