package planner_test

import (
	"errors"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/planner"
)

// grounds is a team with two sites, one of them with two surfaces.
func grounds() planner.Setup {
	second := quillmere()
	second.ID, second.Name = 2, "Nether Ground"
	return planner.Setup{
		Sites:    []planner.Site{quillmere(), second},
		Stations: []planner.Station{{ID: 1, Site: 1, Name: "roof", Rank: 1}, {ID: 2, Site: 1, Name: "pond", Rank: 2}, {ID: 3, Site: 2, Name: "roof", Rank: 1}},
		Surfaces: []planner.Surface{{ID: 1, Site: 1, Name: "greens"}, {ID: 2, Site: 1, Name: "Pitch 2"}, {ID: 3, Site: 2, Name: "greens"}},
		Works: []planner.Work{{ID: 1, Surface: 1, Name: "regulator"}, {ID: 2, Surface: 3, Name: "regulator"},
			{ID: 3, Surface: 1, Name: "feed"}, {ID: 4, Surface: 2, Name: "feed"}},
		Totals: []planner.Total{{ID: 1, Site: 1, Name: "gdd10"}, {ID: 2, Site: 2, Name: "gdd5"}},
	}
}

// lookup finds something by name and returns its id.
type lookup func(s planner.Setup, name string) (int64, error)

func TestLookups(t *testing.T) {
	one, two := grounds().Sites[0], grounds().Sites[1]
	sites := func(s planner.Setup, name string) (int64, error) { n, err := s.Site(name); return n.Key(), err }
	stations := func(site planner.Site) lookup {
		return func(s planner.Setup, name string) (int64, error) {
			n, err := s.Station(site, name)
			return n.Key(), err
		}
	}
	surfaces := func(site planner.Site) lookup {
		return func(s planner.Setup, name string) (int64, error) {
			n, err := s.Surface(site, name)
			return n.Key(), err
		}
	}
	works := func(surface int) lookup {
		return func(s planner.Setup, name string) (int64, error) {
			n, err := s.Work(s.Surfaces[surface], name)
			return n.Key(), err
		}
	}
	totals := func(site planner.Site) lookup {
		return func(s planner.Setup, name string) (int64, error) { n, err := s.Total(site, name); return n.Key(), err }
	}
	for _, row := range []struct {
		what string
		find lookup
		name string
		want int64
		kind planner.Kind // of the problem
		says []string     // in message or hint
	}{
		{"site by name", sites, "Quillmere", 1, "", nil},
		{"site, other letters", sites, "qUILLMERE", 1, "", nil},
		{"site, hyphen for a space", sites, "nether-ground", 2, "", nil},
		{"site, spaces around", sites, " Quillmere ", 1, "", nil},
		{"which of two sites", sites, "", 0, planner.Missing, []string{"site:Quillmere", "Nether Ground"}},
		{"no such site", sites, "Fernhollow", 0, planner.NotFound, []string{"Fernhollow", "Quillmere", "Nether Ground"}},
		{"station of its site", stations(two), "roof", 3, "", nil},
		{"the only station", stations(two), "", 3, "", nil},
		{"which of two stations", stations(one), "", 0, planner.Missing, []string{"roof", "pond"}},
		{"another site's station", stations(two), "pond", 0, planner.NotFound, []string{"pond", "roof"}},
		{"surface with a space", surfaces(one), "pitch 2", 2, "", nil},
		{"which surface, quoted", surfaces(planner.Site{ID: 9}), "", 0, planner.NotFound, []string{"/setup surface add"}},
		{"the only surface", surfaces(two), "", 3, "", nil},
		{"the only work", works(1), "", 4, "", nil},
		{"the same name on another surface", works(2), "regulator", 2, "", nil},
		{"which work", works(0), "", 0, planner.Missing, []string{"regulator", "feed"}},
		{"no such work", works(1), "regulator", 0, planner.NotFound, []string{"Pitch 2", "feed"}},
		{"total", totals(one), "GDD10", 1, "", nil},
		{"the only total", totals(two), "", 2, "", nil},
		{"no total at all", totals(planner.Site{ID: 9}), "gdd10", 0, planner.NotFound, []string{"/setup total add"}},
	} {
		got, err := row.find(grounds(), row.name)
		if got != row.want || (err == nil) != (row.kind == "") {
			t.Errorf("%s: %d, %v; want %d", row.what, got, err, row.want)
			continue
		}
		if err == nil {
			continue
		}
		wantKind(t, row.what, err, row.kind)
		var problem *planner.Problem
		if !errors.As(err, &problem) || problem.Hint == "" {
			t.Errorf("%s: no hint beside %v", row.what, err)
			continue
		}
		for _, word := range row.says {
			if !strings.Contains(problem.Message+"\n"+problem.Hint, word) {
				t.Errorf("%s: %q, %q does not say %q", row.what, problem.Message, problem.Hint, word)
			}
		}
	}
	if _, err := (planner.Setup{}).Site(""); planner.KindOf(err) != planner.NotFound {
		t.Errorf("no site yet: %v", err)
	}
	quoted := planner.Setup{Surfaces: []planner.Surface{{ID: 1, Site: 1, Name: "Pitch 2"}, {ID: 2, Site: 1, Name: "Pitch 3"}}}
	var problem *planner.Problem
	if _, err := quoted.Surface(one, ""); !errors.As(err, &problem) || !strings.Contains(problem.Hint, `surface:"Pitch 2"`) {
		t.Errorf("the hint %v does not quote a name with a space", problem)
	}
}

func TestListsOfASite(t *testing.T) {
	s := grounds()
	var got []int64
	for _, n := range s.StationsOf(1) {
		got = append(got, n.Key())
	}
	for _, n := range s.SurfacesOf(1) {
		got = append(got, 10+n.Key())
	}
	for _, n := range s.WorksOn(1) {
		got = append(got, 20+n.Key())
	}
	for _, n := range s.WorksOf(1) { // surface by surface
		got = append(got, 30+n.Key())
	}
	for _, n := range s.TotalsOf(1) {
		got = append(got, 40+n.Key())
	}
	if want := "[1 2 11 12 21 23 31 33 34 41]"; shot(got) != want {
		t.Errorf("%v, want %s", got, want)
	}
	if s.StationsOf(9) != nil || s.WorksOf(9) != nil || s.TotalsOf(9) != nil {
		t.Error("a site that is not there has something")
	}
	plan := planner.Plan{Surfaces: s.Surfaces, Works: s.Works}
	if surface, ok := plan.Surface(2); !ok || surface.Name != "Pitch 2" {
		t.Errorf("surface 2 is %+v", surface)
	}
	if _, ok := plan.Surface(9); ok || len(plan.WorksOn(1)) != 2 {
		t.Errorf("works on 1: %+v", plan.WorksOn(1))
	}
}

func TestCheckName(t *testing.T) {
	for _, name := range []string{
		"a", "7", "Greens", "pitch 2", "front-nine", "A1-b 2", "Größe", "Поле 3", "芝生", strings.Repeat("a", 32), strings.Repeat("é", 32), "a--b",
	} {
		if err := planner.CheckName(name); err != nil {
			t.Errorf("%q: %v", name, err)
		}
	}
	for _, name := range []string{
		"", " ", "-", " a", "a ", "-a", "a-", "a  b", strings.Repeat("a", 33), strings.Repeat("é", 33), "a.b", "a/b", "a:b", `a"b`, "a_b", "a\tb", "a\nb", "a\n", "greens!", "😀", "a\x00b", "\xff",
	} {
		wantKind(t, name, planner.CheckName(name), planner.Invalid)
	}
}

func TestNameKey(t *testing.T) {
	for name, want := range map[string]string{"Front Greens": "front-greens", "front-greens": "front-greens", " GDD10 ": "gdd10", "Größe 2": "größe-2", "": ""} {
		if got := planner.NameKey(name); got != want {
			t.Errorf("%q is %q, want %q", name, got, want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		name := rapid.StringMatching(`[A-Za-z0-9]([A-Za-z0-9 -]{0,30}[A-Za-z0-9])?`).Draw(t, "name")
		key := planner.NameKey(name)
		if planner.NameKey(key) != key || planner.NameKey(strings.ToUpper(name)) != key || strings.Contains(key, " ") {
			t.Fatalf("%q has the key %q", name, key)
		}
	})
}
