package command

import (
	"context"
	"strings"

	"swardbook/bot/briefing"
	"swardbook/bot/reply"
	"swardbook/calc"
	"swardbook/planner"
)

// topic is a page of help that is not about one command.
type topic struct {
	name, short string
	page        func() reply.Reply
}

func topics() []topic {
	return []topic{
		{"start", "from nothing to the first briefing", startPage},
		{"words", "what the figures mean", wordsPage},
		{"formulas", "every formula with its source", formulasPage},
		{"cautions", "what Swardbook does not know", cautionsPage},
	}
}

func (d Desk) help() Command {
	names := namesOf(topics(), func(t topic) string { return t.name })
	return Command{
		Path: "help", Short: "how to use it, formulas with sources, cautions", Listed: true,
		Options: []Option{{Name: "topic", Kind: Text, Help: "a command, or one of " + strings.Join(names, ", "), Example: "due",
			Complete: func(_ context.Context, _ Request, prefix string) []string {
				var fitting []string
				for _, name := range names {
					if hasPrefixFold(name, prefix) {
						fitting = append(fitting, name)
					}
				}
				return fitting
			}}},
		Examples: []string{"/help", "/help due", `/help topic:"setup work add"`, "/help cautions"},
		Run:      d.runHelp,
	}
}

func (d Desk) runHelp(_ context.Context, req Request) (reply.Reply, error) {
	wanted, given := req.Values.Text("topic")
	table := d.Table(nil)
	if !given {
		return d.firstPage(table, req.Caller.Role), nil
	}
	wanted = strings.Join(strings.Fields(strings.ToLower(strings.TrimPrefix(wanted, "/"))), " ")
	if page, ok := helpOn(wanted, table); ok {
		page.Private = true
		return page, nil
	}
	return reply.Reply{}, planner.Problemf(planner.NotFound, "There is no help on %q.", wanted).
		WithHint("Topics: %s, or a command like /help due.", strings.Join(namesOf(topics(), func(t topic) string { return t.name }), ", "))
}

// helpOn is the page of a topic, a formula, a command, or the word that several
// commands begin with.
func helpOn(wanted string, table Table) (page reply.Reply, ok bool) {
	for _, topic := range topics() {
		if topic.name == wanted {
			return topic.page(), true
		}
	}
	for _, formula := range calc.Catalogue() {
		if formula.ID == wanted {
			return formulaPage(formula), true
		}
	}
	if found, ok := table.Find(wanted); ok {
		return Help(found), true
	}
	inside := table.under(strings.Fields(wanted))
	if len(inside) == 0 {
		return reply.Reply{}, false
	}
	var fields reply.Fields
	for _, command := range inside {
		fields = append(fields, reply.Field{Name: "/" + command.Path, Value: command.Short})
	}
	return reply.Of(reply.Heading("/"+wanted), fields), true
}

func (d Desk) firstPage(table Table, role Role) reply.Reply {
	page := reply.Of(reply.Heading("Swardbook " + d.Version))
	page.Add(table.List(role).Blocks...)
	var fields reply.Fields
	for _, topic := range topics() {
		fields = append(fields, reply.Field{Name: "/help " + topic.name, Value: topic.short})
	}
	page.Add(reply.Heading("More help"), fields)
	page.Private = true
	return page
}

func startPage() reply.Reply {
	return reply.Of(
		reply.Text("A lead sets up once; the crew then types /briefing, /due and /done."),
		reply.Text("1. The site:\n/setup site add name:Quillmere lat:40.69 lon:-74.17 zone:America/New_York units:c"),
		reply.Text("2. The station's file:\n/weather file file:station.csv"),
		reply.Text("3. A surface and its grass:\n/setup surface add name:greens grass:cool"),
		reply.Text("4. What comes round again:\n/setup work add surface:greens name:regulator counts:degree-days base:0 target:200"),
		reply.Text("5. A season total:\n/setup total add name:gdd10 base:10 from:03-01"),
		reply.Text("6. When it was last done:\n/done surfaces:greens works:regulator when:2013-06-20"),
		reply.Text("Every morning:\n/briefing"),
	)
}

func wordsPage() reply.Reply {
	return reply.Of(reply.Fields{
		{Name: "24-hour mean", Value: "the mean of the day's 24 on-the-hour readings; up to 3 missing hours in a row are bridged by a straight line, and said"},
		{Name: "high/low mean", Value: "(high + low) / 2"},
		{Name: "degree days", Value: "temperature above a base, added up day by day; always with unit and base"},
		{Name: "growth potential", Value: "how near the day's mean is to the best for the grass, in percent"},
		{Name: "growth days", Value: "growth potential added up: 1 is a day of perfect growing weather"},
		{Name: "nitrogen left", Value: "what was given less what the surface is expected to have used"},
		{Name: "due", Value: "from the day the count reaches the target; the count starts the day after the work"},
		{Name: "overdue", Value: "a tenth past the target and at least a day, or past the lead's latest"},
		{Name: "likely", Value: "eight of ten past years fell between the two dates"},
		{Name: "at least", Value: "days are missing, so the true total is higher (a + behind the number)"},
		{Name: "season total", Value: "a running total since a start date, through yesterday"},
	})
}

// formulasPage lists the catalogue of formulas; each has a page of its own.
func formulasPage() reply.Reply {
	var fields reply.Fields
	for _, formula := range calc.Catalogue() {
		fields = append(fields, reply.Field{Name: formula.ID, Value: formula.Title})
	}
	return reply.Of(fields, reply.Text("One in full, with its source, like:\n/help growth-potential"))
}

func formulaPage(formula calc.Formula) reply.Reply {
	return reply.Of(reply.Heading(formula.Title), reply.Text(formula.Words),
		reply.Textf("Source: %s.", formula.Origin()))
}

func cautionsPage() reply.Reply {
	return reply.Of(
		reply.Text("Swardbook plans dates. It prescribes no product and no rate."),
		reply.Text("The label's rates, gaps and re-entry times are the law. Local fertiliser ordinances hold. Where a licence is needed, a licensed applicator decides. The work log is not the legal spray record."),
		reply.Text("No feed on frozen, saturated, dormant or drought-browned turf, nor before heavy rain."),
		reply.Text("Growth potential knows temperature only: not water, shade, wear or disease."),
		reply.Text(briefing.TargetCaution),
		reply.Text("The station may stand away from the turf. Air a few degrees above zero can come with white grass: keep traffic off frozen turf."),
		reply.Text("Heat: water, rest and shade. The rules come from the employer and the local code."),
	)
}
