package command

import (
	"context"
	"fmt"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) weatherDay() Command {
	return Command{
		Path: "weather day", Short: "what is known of a day, or a day's high and low by hand",
		Long: "With high and low it keeps them as the station's own extremes of that day.",
		Options: []Option{
			{Name: "date", Kind: Day, Past: true, Help: "which day; yesterday when not given", Example: "yesterday"},
			{Name: "high", Kind: Temperature, Help: "the day's high, to keep it", Example: "29.5"},
			{Name: "low", Kind: Temperature, Help: "the day's low, to keep it", Example: "17"},
			d.stationOption(), d.siteOption(),
		},
		Examples: []string{"/weather day", "/weather day date:2013-07-01 high:29.5 low:17"},
		Run:      d.runWeatherDay,
	}
}

func (d Desk) stationOption() Option {
	return Option{Name: "station", Kind: Name, Help: "which station; not needed with one", Example: "roof", Complete: d.names(func(v visit) []string {
		return namesOf(v.setup.StationsOf(v.site.ID), func(s planner.Station) string { return s.Name })
	})}
}

func (d Desk) runWeatherDay(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	day, err := v.day("date", v.today-1)
	if err != nil {
		return reply.Reply{}, err
	}
	highC, hasHigh := v.temperatureC("high")
	lowC, hasLow := v.temperatureC("low")
	if hasHigh != hasLow {
		return reply.Reply{}, planner.Problemf(planner.Missing, "A day by hand needs both high and low.").
			WithHint("/weather day date:%s high:29.5 low:17", day)
	}
	r := reply.Of()
	if hasHigh {
		if err := v.leadOnly(); err != nil {
			return reply.Reply{}, err
		}
		if day >= v.today {
			return reply.Reply{}, planner.Problemf(planner.Invalid, "%s is not over yet.", shortOn(day, v.today)).
				WithHint("Days ahead are typed with /weather ahead.")
		}
		if err := v.keepDay(ctx, planner.DailyReading{Day: day, HighC: highC, LowC: lowC}); err != nil {
			return reply.Reply{}, err
		}
		r.Add(reply.Text("Kept."))
	}
	record, err := v.book.Record(ctx, v.site.ID)
	if err != nil {
		return reply.Reply{}, err
	}
	facts := record.At(day)
	r.Add(reply.Heading(day.Short()+" "+day.String()[:4]), briefing.DayFields(facts, v.site.Units))
	if facts.SlotsReal > 0 && facts.SlotsReal == facts.SlotsWanted {
		r.Add(reply.Textf("%d of %d readings.", facts.SlotsReal, facts.SlotsWanted))
	}
	if note := briefing.DayNote(facts); note != "" {
		r.Add(reply.Text(note))
	}
	r.Figures = dayFigures(facts)
	return r, nil
}

// keepDay keeps a day by hand, as an import like any other so that it can be
// withdrawn.
func (v visit) keepDay(ctx context.Context, reading planner.DailyReading) error {
	if err := reading.Check(); err != nil {
		return planner.Problemf(planner.Invalid, "%s: %v", shortOn(reading.Day, v.today), err)
	}
	_, err := v.book.Import(ctx, v.site, textOr(v.Values, "station", ""), planner.ImportRequest{
		Stamp: v.stamp(), FileName: "by hand", Units: planner.Celsius,
		Content: strings.NewReader(fmt.Sprintf("date,high_c,low_c\n%s,%v,%v\n", reading.Day, reading.HighC, reading.LowC)),
	})
	return err
}

// leadOnly refuses what only a lead may change.
func (v visit) leadOnly() error {
	if v.Caller.Role < Lead {
		return planner.Problemf(planner.Forbidden, "Only a lead may change the weather record.").WithHint("Ask a lead to do it.")
	}
	return nil
}

// dayFigures are the facts of one day.
func dayFigures(facts planner.DayFacts) planner.Figures {
	f := planner.Figures{{Key: "day.date", Value: float64(facts.Day), Unit: planner.Date, Basis: planner.NoBasis},
		{Key: "day.readings", Value: float64(facts.SlotsReal), Unit: planner.Count, Basis: planner.Readings}}
	if facts.HasExtremes {
		f = append(f, planner.Figure{Key: "day.high_c", Value: facts.HighC, Unit: planner.DegreesC, Basis: planner.Extremes},
			planner.Figure{Key: "day.low_c", Value: facts.LowC, Unit: planner.DegreesC, Basis: planner.Extremes})
	}
	for _, basis := range []planner.Basis{planner.Hourly, planner.Midrange} {
		if meanC, known := facts.Mean(basis); known {
			f = append(f, planner.Figure{Key: "day." + string(basis) + "_mean_c", Value: meanC, Unit: planner.DegreesC, Basis: basis})
		}
	}
	return f
}

func (d Desk) weatherFile() Command {
	return Command{
		Path: "weather file", Short: "read a station file into the record", Who: Lead,
		Long: "Reads what loggers and archives write: CSV in most dialects, GHCN-Daily, ISD-Lite, METAR reports, a service's observations; " +
			"plain, gzip or a zip of one file. What a file does not say it asks for: units, clock, dates, sensor. " +
			"The same file twice changes nothing; /weather undo takes a file back. A site without a station gets one named after the file.",
		Options: []Option{
			{Name: "file", Kind: File, Required: true, Help: "the station's file", Example: "station.csv"},
			{Name: "units", Kind: Choice, Choices: []string{"c", "f"}, Help: "the file's unit, where its header does not say"},
			{Name: "clock", Kind: Text, Help: "its times: standard, wall (with summer time), utc, or an offset", Example: "wall"},
			{Name: "dates", Kind: Text, Help: "d/m/y, m/d/y or y/m/d; for METAR the month of the first", Example: "d/m/y"},
			{Name: "sensor", Kind: Text, Help: "which sensor counts, where the file has several", Example: "green 7"},
			d.stationOption(), d.siteOption(),
		},
		Examples: []string{"/weather file file:station.csv", "/weather file file:station.csv units:f station:roof",
			"/weather file file:station.csv clock:wall dates:d/m/y"},
		Run: d.runWeatherFile,
	}
}

func (d Desk) runWeatherFile(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	name, _ := v.Values.File("file")
	content, err := v.Open("file")
	if err != nil {
		return reply.Reply{}, err
	}
	defer content.Close()
	imported, err := v.book.Import(ctx, v.site, textOr(v.Values, "station", ""), planner.ImportRequest{
		Stamp: v.stamp(), FileName: name, Content: content, Units: planner.Units(textOr(v.Values, "units", "")),
		Clock: textOr(v.Values, "clock", ""), Dates: textOr(v.Values, "dates", ""), Sensor: textOr(v.Values, "sensor", ""),
		Progress: req.Progress,
	})
	if err != nil {
		return reply.Reply{}, err
	}
	r := ImportReply(imported.Station, imported.Report)
	for _, work := range imported.Settled {
		r.Add(reply.Textf("%s now stands on the %s.", work.Name, work.Settings.On(v.today).Basis.Words()))
	}
	return r, nil
}

// ImportReply tells what became of a station file: counts, how times and units
// were read, and what was refused.
func ImportReply(station planner.Station, report planner.ImportReport) reply.Reply {
	r := reply.Of(reply.Textf("%s: %s %s", station.Name, counted(report.Taken(), "row", "rows"), "in the record."))
	fields := reply.Fields{}
	for _, part := range []struct {
		name string
		n    int
	}{{"new", report.New}, {"changed", report.Changed}, {"same", report.Same}, {"empty", report.Empty}, {"refused", report.Refused}} {
		fields = append(fields, reply.Field{Name: part.name, Value: fmt.Sprint(part.n)})
		r.Figures = append(r.Figures, planner.Figure{Key: "import." + part.name, Value: float64(part.n), Unit: planner.Count, Basis: planner.NoBasis})
	}
	if report.Taken() > 0 {
		fields = append(fields, reply.Field{Name: "from", Value: report.From.String()}, reply.Field{Name: "to", Value: report.To.String()})
	}
	r.Add(fields, reply.Text(strings.Join(append([]string{readAs(report)}, report.Notes...), "\n")))
	if rain := report.Rain; rain.All() > 0 {
		r.Add(reply.Textf("Rain: %s, %d new.", counted(rain.All(), "reading", "readings"), rain.New+rain.Changed))
	}
	if len(report.Remembered) > 0 {
		r.Add(reply.Textf("Remembered for %s: %s.", station.Name, strings.Join(report.Remembered, ", ")))
	}
	if len(report.Refusals) == 0 {
		return r
	}
	const most = 5
	told := 0
	for _, refusal := range report.Refusals {
		if refusal.Alike == 0 || told == most {
			continue
		}
		line := fmt.Sprintf("Line %d: %s (%s)", refusal.Line, refusal.Reason, refusal.Value)
		if refusal.Alike > 1 {
			line += fmt.Sprintf(", and %s like it", counted(refusal.Alike-1, "row", "rows"))
		}
		r.Add(reply.Text(line))
		told++
	}
	if told < report.Refused {
		r.Add(refusedFile(report))
	}
	return r
}

func readAs(report planner.ImportReport) string {
	if report.Format == "daily" {
		return "Read as daily highs and lows in " + report.Units.Degree() + "."
	}
	return "Read as readings in " + report.Units.Degree() + "; times: " + report.Clock + "."
}

// refusedFile lists all refused rows that were kept, for a spreadsheet.
func refusedFile(report planner.ImportReport) reply.File {
	var text strings.Builder
	text.WriteString("line,value,reason\n")
	for _, refusal := range report.Refusals {
		fmt.Fprintf(&text, "%d,%s,%s\n", refusal.Line, csvField(refusal.Value), csvField(refusal.Reason))
	}
	return reply.File{Name: "refused.csv", Content: []byte(text.String())}
}

// csvField quotes a value, and keeps a spreadsheet from taking it for a
// formula.
func csvField(value string) string {
	if value != "" && strings.ContainsRune("=+-@", rune(value[0])) {
		value = "'" + value
	}
	return `"` + strings.ReplaceAll(value, `"`, `""`) + `"`
}

func (d Desk) weatherAhead() Command {
	return Command{
		Path: "weather ahead", Short: "the days ahead, typed by hand",
		Long: "Without highs and lows it shows the days ahead. Typed days stand until they are typed again or cleared.",
		Options: []Option{
			{Name: "from", Kind: Day, Help: "first day; today when not given", Example: "today"},
			{Name: "highs", Kind: Numbers, Help: "highs, one a day", Example: "29 30 28"},
			{Name: "lows", Kind: Numbers, Help: "lows, one a day", Example: "18 19 18"},
			{Name: "humidity", Kind: Numbers, Help: "relative humidity in the hottest hour, percent, one a day", Example: "60 55 50"},
			{Name: "rain", Kind: Numbers, Help: "rain, mm, one a day", Example: "0 4 0"},
			{Name: "wind", Kind: Numbers, Help: "wind, m/s, one a day", Example: "3 6 4"},
			{Name: "clear", Kind: Yes, Help: "take typed days from that day on back"},
			d.siteOption(),
		},
		Examples: []string{"/weather ahead", `/weather ahead from:2013-07-01 highs:"29 30 28" lows:"18 19 18"`, "/weather ahead clear:yes"},
		Run:      d.runWeatherAhead,
	}
}

func (d Desk) runWeatherAhead(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	from, err := v.day("from", v.today)
	if err != nil {
		return reply.Reply{}, err
	}
	days, err := v.typedDays(from)
	if err != nil {
		return reply.Reply{}, err
	}
	if err := v.alsoTyped(days); err != nil {
		return reply.Reply{}, err
	}
	r := reply.Of()
	switch clear, _ := v.Values.Yes("clear"); {
	case clear && len(days) > 0:
		return reply.Reply{}, planner.Problemf(planner.Invalid, "Either clear days or type them.").WithHint("/weather ahead clear:yes")
	case clear:
		if days, err = v.typedFrom(ctx, from); err != nil {
			return reply.Reply{}, err
		}
		r.Add(reply.Textf("%s taken back.", counted(len(days), "typed day", "typed days")))
	case len(days) > 0:
		r.Add(reply.Textf("%s kept.", counted(len(days), "day", "days")))
	}
	if len(days) > 0 {
		if err := v.leadOnly(); err != nil {
			return reply.Reply{}, err
		}
		if err := v.book.SaveAhead(ctx, v.stamp(), v.site.ID, v.today, days); err != nil {
			return reply.Reply{}, err
		}
	}
	plan, err := v.plan(ctx, v.today)
	if err != nil {
		return reply.Reply{}, err
	}
	r.Add(aheadTable(plan.Outlook, v.site.Units), reply.Text(briefing.AheadNote(plan.Outlook)))
	r.Figures = aheadFigures(plan.Outlook)
	return r, nil
}

// alsoTyped reads humidity, rain and wind into the typed days, one a day.
func (v visit) alsoTyped(days []planner.HandDay) error {
	for _, option := range []struct {
		name string
		into func(*planner.HandDay) *planner.Optional
	}{
		{"humidity", func(day *planner.HandDay) *planner.Optional { return &day.HumidityPercent }},
		{"rain", func(day *planner.HandDay) *planner.Optional { return &day.RainMM }},
		{"wind", func(day *planner.HandDay) *planner.Optional { return &day.WindMS }},
	} {
		values, given := v.Values.Numbers(option.name)
		if !given {
			continue
		}
		if len(values) != len(days) {
			return v.Invalid(option.name, "%d days and %d values of %s", len(days), len(values), option.name)
		}
		for i, value := range values {
			*option.into(&days[i]) = planner.Optional{Value: value, Known: true}
		}
	}
	return nil
}

// typedFrom returns the typed days that hold from the day on, each cleared.
func (v visit) typedFrom(ctx context.Context, from planner.Day) ([]planner.HandDay, error) {
	plan, err := v.plan(ctx, v.today)
	if err != nil {
		return nil, err
	}
	var days []planner.HandDay
	for _, facts := range plan.Outlook.Path {
		if facts.ExtremesFrom == planner.FromHand && facts.Day >= from {
			days = append(days, planner.HandDay{Day: facts.Day, Cleared: true})
		}
	}
	return days, nil
}

// daysShown is how many days ahead are shown.
const daysShown = 10

func aheadDays(outlook planner.Outlook) []planner.DayFacts {
	from := int(outlook.AsOf - outlook.Start)
	return outlook.Path[min(from, len(outlook.Path)):min(from+daysShown, len(outlook.Path))]
}

func aheadTable(outlook planner.Outlook, units planner.Units) reply.Table {
	table := reply.Table{
		Title:   "Days ahead, " + units.Degree(),
		Columns: []reply.Column{reply.Left("day"), reply.Right("high"), reply.Right("low"), reply.Left("from")},
	}
	for _, facts := range aheadDays(outlook) {
		row := []string{facts.Day.Short(), "-", "-", "past"}
		if facts.HasExtremes {
			row[1] = briefing.Amount(facts.HighC, planner.DegreesC, units)
			row[2] = briefing.Amount(facts.LowC, planner.DegreesC, units)
		}
		if facts.ExtremesFrom == planner.FromHand {
			row[3] = "typed"
		}
		table.Rows = append(table.Rows, row)
	}
	return table
}

func aheadFigures(outlook planner.Outlook) planner.Figures {
	f := planner.Figures{{Key: "ahead.typed", Value: float64(outlook.Typed), Unit: planner.Days, Basis: planner.NoBasis},
		{Key: "ahead.years", Value: float64(outlook.Years), Unit: planner.Count, Basis: planner.NoBasis}}
	for _, facts := range aheadDays(outlook) {
		if facts.HasExtremes {
			key := "ahead." + facts.Day.String() + "."
			f = append(f, planner.Figure{Key: key + "high_c", Value: facts.HighC, Unit: planner.DegreesC, Basis: planner.Extremes},
				planner.Figure{Key: key + "low_c", Value: facts.LowC, Unit: planner.DegreesC, Basis: planner.Extremes})
		}
	}
	return f
}
