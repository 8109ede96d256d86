package planner_test

import (
	"fmt"
	"testing"

	"swardbook/planner"
)

func TestCorrections(t *testing.T) {
	figure := func(key string, value float64, unit planner.Unit) planner.Figure {
		return planner.Figure{Key: key, Value: value, Unit: unit}
	}
	posted := planner.Figures{
		figure("due.greens.regulator.hourly.total", 188, planner.DegreeDays),
		figure("due.greens.regulator.midrange.total", 190, planner.DegreeDays),
		figure("due.greens.regulator.hourly.target", 200, planner.DegreeDays),
		figure("due.greens.feed.hourly.total", 1.2, planner.NitrogenGM2),
		figure("total.gdd10.hourly", 300.2, planner.DegreeDays),
		figure("total.gone.hourly", 5, planner.DegreeDays),
		figure("due.tees.feed.hourly.total", 3, planner.GrowthDays),
		figure("due.tees.feed.hourly.since", 100, planner.Date),
		figure("yesterday.hourly_mean_c", 18.7, planner.DegreesC),
		figure("yesterday.readings", 20, planner.Count),
	}
	now := planner.Figures{
		figure("due.greens.regulator.hourly.total", 196, planner.DegreeDays),
		figure("due.greens.regulator.midrange.total", 190.4, planner.DegreeDays), // would not show
		figure("due.greens.regulator.hourly.target", 250, planner.DegreeDays),    // no reading moved it
		figure("due.greens.feed.hourly.total", 1.21, planner.NitrogenGM2),
		figure("total.gdd10.hourly", 300.2, planner.DegreeDays),
		figure("yesterday.hourly_mean_c", 19.1, planner.DegreesC),
		figure("yesterday.readings", 24, planner.Count),
		figure("total.new.hourly", 7, planner.DegreeDays),
		figure("due.tees.feed.hourly.total", 1, planner.GrowthDays), // logged since
		figure("due.tees.feed.hourly.since", 105, planner.Date),
	}
	want := []planner.Correction{
		{Key: "due.greens.regulator.hourly.total", Was: 188, Is: 196, Unit: planner.DegreeDays},
		{Key: "due.greens.feed.hourly.total", Was: 1.2, Is: 1.21, Unit: planner.NitrogenGM2},
		{Key: "yesterday.hourly_mean_c", Was: 18.7, Is: 19.1, Unit: planner.DegreesC},
	}
	if got := planner.Corrections(posted, now); fmt.Sprint(got) != fmt.Sprint(want) {
		t.Errorf("%+v, want %+v", got, want)
	}
	if got := planner.Corrections(posted, posted); got != nil {
		t.Errorf("nothing moved, but %+v", got)
	}
}
