package workbook

import (
	"strings"

	"swardbook/planner"
)

// grass writes what grows on the surfaces, and their area.
func (b *book) grass(p *page) error {
	if _, err := p.add(); err != nil {
		return err
	}
	area := b.units.Amounts(planner.MassRate).Area
	if _, err := p.wrapped(lineHeight, workWide, b.heads("surface", "from", "optimum", "width", "most nitrogen a month, g/m²", "area, "+area)...); err != nil {
		return err
	}
	first := p.row + 1
	for _, surface := range b.Plan.Surfaces {
		for i, turf := range surface.Turf {
			from, size := any("always"), b.value(plainText, "")
			if i > 0 {
				from = serial(turf.Day)
			} else if size = b.value(inTwo, b.area(surface)); surface.AreaM2 <= 0 {
				size.Value = nil
			}
			if _, err := p.add(b.value(plainText, surface.Name), b.value(date, from), b.value(inTwo, b.units.Temperature(turf.Value.Curve.OptimumC)),
				b.value(inTwo, b.units.Difference(turf.Value.Curve.WidthC)), b.value(inTwo, turf.Value.CeilingGM2), size); err != nil {
				return err
			}
		}
	}
	for _, input := range []struct {
		col    string
		takes  kind
		prompt string
	}{
		{"C", b.temperatures(), "The mean temperature of full growth, " + b.units.Degree() + "."},
		{"D", numbers(0.1, 100), "Degrees from the optimum at which growth is 61 %."},
		{"E", numbers(0, 20), "Nitrogen in g/m² that a month of perfect growing weather uses."},
		{"F", numbers(0, 1.1e8), "The area of the whole surface, " + area + "."},
	} {
		if err := p.takes(input.col, first, p.row, input.takes, input.prompt); err != nil {
			return err
		}
	}
	return nil
}

// log writes the feeds that count, then the newest lines of the work log.
func (b *book) log(p *page) error {
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.add(b.heads("surface number", "surface", "fed on", "at once, g N/m²", "slow, g N/m²", "over days")...); err != nil {
		return err
	}
	first := p.row + 1
	for _, feed := range b.feeds() {
		over, slow := 7*feed.Weeks, feed.SlowGM2
		if over <= 0 { // nothing comes slowly without weeks
			over, slow = 1, 0
		}
		if _, err := p.wrapped(lineHeight, workWide, b.value(whole, float64(feed.surface.ID)), b.value(plainText, feed.surface.Name), b.value(inDate, serial(feed.Day)),
			b.value(inTwo, feed.QuickGM2), b.value(inTwo, slow), b.value(inNumber, over)); err != nil {
			return err
		}
	}
	for _, input := range []struct {
		col    string
		takes  kind
		prompt string
	}{
		{"C", dates(), "The day of the feed."},
		{"D", numbers(0, 100), "Nitrogen that is there at once, g/m² over the whole surface."},
		{"E", numbers(0, 100), "Nitrogen that comes slowly, g/m² over the whole surface."},
		{"F", numbers(1, 364), "Days over which the slow nitrogen comes: its weeks times 7."},
	} {
		if err := p.takes(input.col, first, p.row, input.takes, input.prompt); err != nil {
			return err
		}
	}
	// The last row of the names is no feed: rows put in above it are inside, and
	// the names outlive the last feed taken out.
	if _, err := p.add(b.value(whole, 0.0), b.value(plainText, "end of the feeds"), b.value(whole, 0.0), b.value(whole, 0.0), b.value(whole, 0.0), b.value(whole, 1.0)); err != nil {
		return err
	}
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.add(b.heads("done on", "what", "by", "note", "rate", "for the area")...); err != nil {
		return err
	}
	for _, entry := range b.passes() {
		if _, err := p.wrapped(lineHeight, workWide-2, b.value(date, serial(entry.Day)), b.value(plainText, b.what(entry)), b.value(plainText, entry.By), b.value(plainText, entry.Note),
			b.value(plainText, b.each(entry, b.given)), b.value(plainText, b.each(entry, b.took))); err != nil {
			return err
		}
	}
	return nil
}

// each joins what is said of the entry's passes of works of the sheet.
func (b *book) each(entry planner.Entry, say func(planner.Surface, planner.Work, planner.Pass) string) string {
	var parts []string
	for _, pass := range entry.Passes {
		for _, work := range b.Plan.Works {
			surface, ok := b.Plan.Surface(work.Surface)
			if work.ID != pass.Work || !ok {
				continue
			}
			if text := say(surface, work, pass); text != "" {
				parts = append(parts, text)
			}
		}
	}
	return strings.Join(parts, ", ")
}

// what names the works of an entry.
func (b *book) what(entry planner.Entry) string {
	return b.each(entry, func(surface planner.Surface, work planner.Work, pass planner.Pass) string {
		text := surface.Name + " " + work.Name
		if part := surface.PartName(pass.Part); part != "" {
			text += " (" + part + ")"
		}
		return text
	})
}

// given is the rate of a pass.
func (b *book) given(_ planner.Surface, _ planner.Work, pass planner.Pass) string {
	if pass.Rate.Value <= 0 {
		return ""
	}
	text := roundedWords(b.rate(pass.Rate)) + " " + b.units.Amounts(pass.Rate.Kind).Rate
	if pass.Rate.Kind == planner.MassRate && pass.Rate.NPercent > 0 {
		text += " at " + roundedWords(pass.Rate.NPercent) + " % N"
	}
	return text
}

// took is what a pass took of its product, over the part that was done.
func (b *book) took(surface planner.Surface, _ planner.Work, pass planner.Pass) string {
	units := b.units.Amounts(pass.Rate.Kind)
	total := b.rate(pass.Rate) * b.area(surface) * surface.ShareOf(pass.Part) / units.Divisor
	if !(total > 0) {
		return ""
	}
	return roundedWords(total) + " " + units.Total
}
