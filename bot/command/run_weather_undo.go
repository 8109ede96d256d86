package command

import (
	"context"
	"fmt"
	"strings"
	"time"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/planner"
)

// importsShown is how many imports a list shows.
const importsShown = 15

func (d Desk) weatherUndo() Command {
	return Command{
		Path: "weather undo", Short: "withdraw a station file: the newest, or the one with the number", Who: Lead,
		Long: "Its values leave the record and those that it replaced come back; what a later file gave too stays. " +
			"It says which days move, and asks first. With list:yes it shows the files instead.",
		Options: []Option{
			{Name: "import", Kind: Whole, Range: AtLeast(1), Help: "the file's number; the newest when not given", Example: "12"},
			{Name: "list", Kind: Yes, Help: "show the files and their numbers"},
			d.siteOption(),
		},
		Examples: []string{"/weather undo", "/weather undo import:12", "/weather undo list:yes"},
		Run:      d.runWeatherUndo,
	}
}

func (d Desk) runWeatherUndo(ctx context.Context, req Request) (reply.Reply, error) {
	v, err := d.visit(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	if list, _ := v.Values.Yes("list"); list {
		return v.importList(ctx)
	}
	id, _ := v.Values.Whole("import")
	done, err := v.book.Withdraw(ctx, v.stamp(), v.site.ID, planner.ImportID(id), !req.Confirmed)
	if err != nil {
		return reply.Reply{}, err
	}
	said := "Withdrawn"
	if !req.Confirmed {
		said = "Withdraws"
	}
	r := reply.Of(reply.Textf("%s import %s.", said, v.importWords(done.Import)),
		reply.Fields{
			{Name: "values gone", Value: fmt.Sprint(done.Gone)},
			{Name: "values back", Value: fmt.Sprint(done.Restored)},
			{Name: "values that stay", Value: fmt.Sprint(done.Kept)},
			{Name: "days moved", Value: fmt.Sprint(len(done.Moved))},
		})
	r.Figures = planner.Figures{
		{Key: "undo.import", Value: float64(done.Import.ID), Unit: planner.Count, Basis: planner.NoBasis},
		{Key: "undo.gone", Value: float64(done.Gone), Unit: planner.Count, Basis: planner.NoBasis},
		{Key: "undo.restored", Value: float64(done.Restored), Unit: planner.Count, Basis: planner.NoBasis},
		{Key: "undo.kept", Value: float64(done.Kept), Unit: planner.Count, Basis: planner.NoBasis},
		{Key: "undo.days", Value: float64(len(done.Moved)), Unit: planner.Count, Basis: planner.NoBasis},
	}
	if len(done.Moved) > 0 {
		r.Add(v.movedTable(done.Moved))
	}
	if len(done.Moved) > movedShown {
		r.Add(reply.Textf("To %s, %d days in all.", done.Moved[len(done.Moved)-1].After.Day.Short(), len(done.Moved)))
	}
	if !req.Confirmed {
		// The newest may be another one in ten minutes.
		r.Confirm = &reply.Confirm{Question: "Withdraw it?", Line: req.LineWith("import", fmt.Sprint(done.Import.ID))}
	}
	return r, nil
}

// movedShown is how many days that moved are shown: what fits a phone.
const movedShown = 7

// movedTable shows the days that moved, each as it was and as it is.
func (v visit) movedTable(moved []planner.MovedDay) reply.Table {
	table := reply.Table{
		Title:   "Days moved, mean in " + v.site.Units.Degree(),
		Columns: []reply.Column{reply.Left("day"), reply.Right("was"), reply.Right("is")},
	}
	for _, day := range moved[:min(len(moved), movedShown)] {
		table.Rows = append(table.Rows, []string{day.After.Day.Short(), v.meanWords(day.Before), v.meanWords(day.After)})
	}
	return table
}

// meanWords is the day's 24-hour mean, else its high/low mean.
func (v visit) meanWords(facts planner.DayFacts) string {
	for _, basis := range []planner.Basis{planner.Hourly, planner.Midrange} {
		if meanC, known := facts.Mean(basis); known {
			return briefing.Amount(meanC, planner.DegreesC, v.site.Units)
		}
	}
	return "-"
}

// importWords names an import: "12: july.csv, Tue 4 Jun, by Ann".
func (v visit) importWords(one planner.Import) string {
	day := planner.DayIn(one.At, time.UTC)
	if zone, err := v.site.Location(); err == nil {
		day = planner.DayIn(one.At, zone)
	}
	name := one.FileName[strings.LastIndexAny(one.FileName, `/\`)+1:]
	return fmt.Sprintf("%d: %s, %s, by %s", one.ID, name, day.Short(), one.By)
}

func (v visit) importList(ctx context.Context) (reply.Reply, error) {
	imports, err := v.book.Imports(ctx, v.site.ID, importsShown)
	if err != nil {
		return reply.Reply{}, err
	}
	if len(imports) == 0 {
		return reply.Of(reply.Text("No station file was read yet. /weather file file:station.csv")), nil
	}
	var lines []string
	for _, one := range imports {
		line := fmt.Sprintf("%s: %d new, %d changed, %d same", v.importWords(one), one.New, one.Changed, one.Same)
		if one.Withdrawn {
			line += "; withdrawn"
		}
		lines = append(lines, line)
	}
	return reply.Of(reply.Text(strings.Join(lines, "\n"))), nil
}
