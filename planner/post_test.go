package planner_test

import (
	"fmt"
	"testing"
	"time"

	"swardbook/planner"
)

func TestWeekdays(t *testing.T) {
	for _, row := range []struct {
		days []time.Weekday
		want string
	}{
		{nil, "every day"},
		{[]time.Weekday{time.Thursday, time.Monday}, "mon,thu"},
		{[]time.Weekday{time.Sunday, time.Saturday}, "sat,sun"},
		{[]time.Weekday{0, 1, 2, 3, 4, 5, 6}, "every day"},
	} {
		set := planner.WeekdaysOf(row.days...)
		if got := set.String(); got != row.want {
			t.Errorf("%v: %q, want %q", row.days, got, row.want)
		}
		for day := time.Sunday; day <= time.Saturday; day++ {
			want := row.want == "every day"
			for _, one := range row.days {
				want = want || one == day
			}
			if set.Has(day) != want {
				t.Errorf("%v has %s: %v", row.days, day, !want)
			}
		}
	}
}

func TestPostCheck(t *testing.T) {
	good := planner.Post{Site: 1, What: "morning", Minute: 330, Channel: "77", WindowMinutes: planner.DefaultWindowMinutes}
	if err := good.Check(); err != nil || good.Clock() != "05:30" {
		t.Errorf("%v, %s", err, good.Clock())
	}
	for name, bend := range map[string]func(*planner.Post){
		"no site":     func(p *planner.Post) { p.Site = 0 },
		"nothing":     func(p *planner.Post) { p.What = "" },
		"before":      func(p *planner.Post) { p.Minute = -1 },
		"past":        func(p *planner.Post) { p.Minute = 24 * 60 },
		"short":       func(p *planner.Post) { p.WindowMinutes = 14 },
		"long":        func(p *planner.Post) { p.WindowMinutes = 23*60 + 1 },
		"eighth day":  func(p *planner.Post) { p.On = 1 << 7 },
		"no channel":  func(p *planner.Post) { p.Channel = "" },
		"odd channel": func(p *planner.Post) { p.Channel = "7\n7" },
	} {
		post := good
		bend(&post)
		if err := post.Check(); planner.KindOf(err) != planner.Invalid {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func ExampleSetup_RoleOf() {
	setup := planner.Setup{People: []planner.People{{Group: "leads", Role: planner.LeadRole}}}
	fmt.Println(setup.RoleOf([]string{"leads"}))
	fmt.Println(setup.RoleOf(nil)) // no group is crew: everybody is
	setup.People = append(setup.People, planner.People{Group: "staff", Role: planner.CrewRole})
	fmt.Println(setup.RoleOf([]string{"guests", "staff"}))
	fmt.Println(setup.RoleOf([]string{"guests"}))
	// Output:
	// lead true
	// crew true
	// crew true
	// crew false
}

func TestSiteIn(t *testing.T) {
	setup := planner.Setup{Sites: []planner.Site{{ID: 1, Name: "one"}, {ID: 2, Name: "two"}},
		Channels: []planner.Channel{{Outside: "7", Site: 2}, {Outside: "8", Site: 3}}}
	for channel, want := range map[string]string{"7": "two", "8": "", "9": "", "": ""} {
		if site, ok := setup.SiteIn(channel); site.Name != want || ok != (want != "") {
			t.Errorf("%q: %q, %v", channel, site.Name, ok)
		}
	}
}
