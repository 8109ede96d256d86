package planner_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"swardbook/calc"
	"swardbook/planner"
	"swardbook/planner/outlook"
)

// A season of an invented club, played through: 8 surfaces, 20 works, 400
// entries, feeds quick and slow on whole surfaces and on parts, some lost, a
// switch of grass in autumn. The balances must agree with a ledger kept here
// day by day from the written rules alone.
func TestASeasonPlayedThrough(t *testing.T) {
	club := newClub()
	for _, asOf := range []planner.Day{planner.DayOf(2023, 4, 20), planner.DayOf(2023, 7, 1), planner.DayOf(2023, 10, 15), planner.DayOf(2023, 12, 31)} {
		plan := club.plan(asOf)
		evaluation, err := planner.Evaluate(plan)
		if err != nil {
			t.Fatal(err)
		}
		figures := evaluation.Figures()
		checked := 0
		for _, surface := range plan.Surfaces {
			for _, basis := range []planner.Basis{planner.Hourly, planner.Midrange} {
				want, fed := club.ledger(surface, basis, asOf)
				key := "nitrogen." + surface.Name + "."
				got, ok := figures.Get(key + string(basis) + ".left")
				if ok != fed {
					t.Fatalf("%s on %s: balance %v, ledger %v", surface.Name, asOf, ok, fed)
				}
				if !fed {
					continue
				}
				checked++
				near(t, fmt.Sprintf("%s %s left on %s", surface.Name, basis, asOf), got.Value, want.left, 1e-9)
				near(t, surface.Name+" given", value(figures, key+"given"), want.given, 1e-9)
				near(t, surface.Name+" to come", value(figures, key+"slow_to_come"), want.toCome, 1e-9)
				// Nothing left is silently lost: given = used + left + still to come.
				near(t, surface.Name+" conserved", value(figures, key+"given"),
					value(figures, key+string(basis)+".used")+got.Value+value(figures, key+"slow_to_come"), 1e-9)
			}
		}
		if checked < 10 {
			t.Errorf("only %d balances on %s", checked, asOf)
		}
	}
}

func value(figures planner.Figures, key string) float64 {
	figure, _ := figures.Get(key)
	return figure.Value
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.12f, the ledger has %.12f", what, got, want)
	}
}

// club is the invented club: its set-up, its log and its weather.
type club struct {
	surfaces []planner.Surface
	works    []planner.Work
	log      []planner.Entry
	facts    []planner.DayFacts
}

const autumn = 9 // month of the switch of grass

func newClub() club {
	random := rand.New(rand.NewPCG(8, 20))
	var c club
	for i := range 8 {
		turf := planner.Always(planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 2 + 0.25*float64(i)})
		if i%3 == 1 { // warm-season, overseeded in autumn
			turf = planner.Always(planner.Turf{Grass: "warm", Curve: calc.WarmSeason(), CeilingGM2: 4}).
				With(planner.DayOf(2023, autumn, 10), planner.Turf{Grass: "cool", Curve: calc.CoolSeason(), CeilingGM2: 3})
		}
		surface := planner.Surface{ID: planner.SurfaceID(i + 1), Site: 1, Name: fmt.Sprintf("surface-%d", i+1), Turf: turf}
		if i%2 == 0 {
			surface.Parts = []planner.Part{{ID: 1, Name: "front", Share: 0.6}, {ID: 2, Name: "back", Share: 0.4}}
		}
		c.surfaces = append(c.surfaces, surface)
	}
	for i := range 20 {
		counting := []planner.WorkSettings{
			{Counting: planner.Counting{Counts: planner.ByNitrogen}, Target: 0.2},
			{Counting: planner.Counting{Counts: planner.ByDegreeDays, Method: calc.MethodMean}, Target: 200},
			{Counting: planner.Counting{Counts: planner.ByGrowthDays}, Target: 10},
			{Counting: planner.Counting{Counts: planner.ByDays}, Target: 14},
		}[i%4]
		c.works = append(c.works, planner.Work{ID: planner.WorkID(i + 1), Surface: planner.SurfaceID(i%8 + 1), Name: fmt.Sprintf("work-%d", i+1),
			Settings: planner.Always(counting)})
	}
	first := planner.DayOf(2023, 1, 1)
	for day := first; day <= planner.DayOf(2023, 12, 31); day++ {
		meanC := 11 - 11*math.Cos(2*math.Pi*float64(day-first-18)/365) + 3*random.NormFloat64()
		halfC := 4 + 2*random.Float64()
		c.facts = append(c.facts, planner.DayFacts{Day: day, HasExtremes: true, HighC: meanC + halfC, LowC: meanC - halfC + 0.5,
			ExtremesFrom: planner.FromStation, HasHourly: true, HourlyC: meanC, SlotsReal: 24, SlotsWanted: 24})
	}
	for i := range 400 {
		work := c.works[random.IntN(len(c.works))]
		surface := c.surfaces[work.Surface-1]
		entry := planner.Entry{ID: planner.EntryID(i + 1), Site: 1, Day: first + planner.Day(60+random.IntN(280)), By: "Alder", At: time.Unix(0, 0)}
		pass := planner.Pass{Work: work.ID}
		if len(surface.Parts) > 0 && random.IntN(3) == 0 {
			pass.Part = surface.Parts[random.IntN(2)].ID
		}
		if random.IntN(4) == 0 {
			pass.Rate = planner.Rate{Kind: planner.MassRate, Value: 4 + 8*random.Float64(), NPercent: 20}
			pass.NitrogenGM2 = pass.Rate.NitrogenGM2()
			if random.IntN(2) == 0 {
				pass.SlowShare, pass.SlowWeeks = 0.5, float64(4+random.IntN(8))
			}
		}
		if random.IntN(15) == 0 {
			entry.Result = planner.Lost
		}
		entry.Passes = []planner.Pass{pass}
		c.log = append(c.log, entry)
	}
	return c
}

// plan is the club on a morning; entries of the morning and later are not
// known yet.
func (c club) plan(asOf planner.Day) planner.Plan {
	record := planner.Record{Facts: c.facts}.Before(asOf)
	plan := planner.Plan{
		Site: planner.Site{ID: 1, Name: "Quillmere", Lat: 40, Units: planner.Celsius}, AsOf: asOf, Record: record,
		Surfaces: c.surfaces, Works: c.works, Outlook: outlook.Simple{}.Outlook(record, nil, asOf),
	}
	for day := c.facts[0].Day; day < asOf; day++ {
		for _, entry := range c.log {
			if entry.Day == day {
				plan.Log = append(plan.Log, entry)
			}
		}
	}
	return plan
}

type ledgerPage struct{ given, toCome, left float64 }

// ledger keeps the surface's balance by hand: each day what came (the quick
// share on the day itself, the slow share in even daily parts after it) less
// what growth potential says was used, from the day after the first feed on.
func (c club) ledger(surface planner.Surface, basis planner.Basis, asOf planner.Day) (page ledgerPage, fed bool) {
	started := planner.Day(0)
	for _, facts := range c.facts {
		if facts.Day >= asOf {
			break
		}
		if fed && facts.Day > started {
			page.left -= ledgerUse(surface, facts, basis)
		}
		for _, entry := range c.log {
			work := c.works[entry.Passes[0].Work-1]
			pass := entry.Passes[0]
			if work.Surface != surface.ID || entry.Result == planner.Lost || pass.NitrogenGM2 == 0 || entry.Day > facts.Day {
				continue
			}
			share := 1.0
			for _, part := range surface.Parts {
				if part.ID == pass.Part {
					share = part.Share
				}
			}
			amount := share * pass.Rate.Value * pass.Rate.NPercent / 100
			if entry.Day == facts.Day {
				if !fed {
					fed, started = true, facts.Day
				}
				page.given += amount
				page.left += amount * (1 - pass.SlowShare)
				page.toCome += amount * pass.SlowShare
				continue
			}
			if days := 7 * pass.SlowWeeks; pass.SlowShare > 0 && float64(facts.Day-entry.Day) <= days {
				page.left += amount * pass.SlowShare / days
				page.toCome -= amount * pass.SlowShare / days
			}
		}
	}
	return page, fed
}

func ledgerUse(surface planner.Surface, facts planner.DayFacts, basis planner.Basis) float64 {
	optimumC, widthC, ceiling := 20.0, 5.5, 2+0.25*float64(surface.ID-1)
	if (surface.ID-1)%3 == 1 {
		optimumC, widthC, ceiling = 31, 7, 4
		if facts.Day >= planner.DayOf(2023, autumn, 10) {
			optimumC, widthC, ceiling = 20, 5.5, 3
		}
	}
	meanC := facts.HourlyC
	if basis == planner.Midrange {
		meanC = (facts.HighC + facts.LowC) / 2
	}
	year, month, _ := facts.Day.Date()
	daysInMonth := float64(time.Date(year, month+1, 0, 0, 0, 0, 0, time.UTC).Day())
	return math.Exp(-0.5*math.Pow((meanC-optimumC)/widthC, 2)) * ceiling / daysInMonth
}

// The order in which the same passes were logged does not matter, and taking an
// entry back restores every figure.
func TestOrderOfLoggingAndUndo(t *testing.T) {
	c := newClub()
	asOf := planner.DayOf(2023, 8, 1)
	before := figuresOf(t, c.plan(asOf))
	shuffled := c
	shuffled.log = append([]planner.Entry(nil), c.log...)
	rand.New(rand.NewPCG(1, 2)).Shuffle(len(shuffled.log), func(i, j int) {
		shuffled.log[i], shuffled.log[j] = shuffled.log[j], shuffled.log[i]
	})
	sameFigures(t, "shuffled", before, figuresOf(t, shuffled.plan(asOf)))
	with := c
	with.log = append(append([]planner.Entry(nil), c.log...), planner.Entry{ID: 999, Site: 1, Day: asOf - 1,
		Passes: []planner.Pass{{Work: 1, NitrogenGM2: 2, Rate: planner.Rate{Kind: planner.NutrientRate, Value: 2}}}})
	if after := figuresOf(t, with.plan(asOf)); fmt.Sprint(after) == fmt.Sprint(before) {
		t.Error("another feed changed nothing")
	}
	sameFigures(t, "undone", before, figuresOf(t, c.plan(asOf)))
}

func figuresOf(t *testing.T, plan planner.Plan) planner.Figures {
	t.Helper()
	evaluation, err := planner.Evaluate(plan)
	if err != nil {
		t.Fatal(err)
	}
	return evaluation.Figures()
}

func sameFigures(t *testing.T, what string, want, got planner.Figures) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%s: %d figures, want %d", what, len(got), len(want))
	}
	for i := range want {
		if got[i].Key != want[i].Key || math.Abs(got[i].Value-want[i].Value) > 1e-9 {
			t.Errorf("%s: %s is %v, want %s %v", what, got[i].Key, got[i].Value, want[i].Key, want[i].Value)
		}
	}
}
