package command

import (
	"context"
	"fmt"
	"time"

	"swardbook/bot/reply"
	"swardbook/planner"
)

func (d Desk) setupSite() []Command {
	place := []Option{
		{Name: "units", Kind: Choice, Choices: []string{"c", "f"}, Help: "shows and takes °C or °F"},
		{Name: "offset", Kind: Number, Range: Between(-12, 14), Help: "standard time, hours from UTC, if not the zone's", Example: "-5"},
		{Name: "day", Kind: Choice, Choices: []string{string(planner.StandardMidnight), string(planner.CivilMidnight), string(planner.FixedHour)},
			Help: "the day runs by standard time, the clock on the wall, or to an hour"},
		{Name: "hour", Kind: Whole, Range: Between(1, 23), Help: "with day:hour: the hour at which a day ends", Example: "9"},
		{Name: "hours", Kind: Choice, Choices: []string{"00-23", "01-24"}, Help: "which 24 readings make the 24-hour mean"},
	}
	add := append([]Option{
		nameOption("what the site is called", "Quillmere", nil),
		{Name: "lat", Kind: Number, Required: true, Range: Between(-90, 90), Help: "latitude in degrees, south negative", Example: "40.69"},
		{Name: "lon", Kind: Number, Required: true, Range: Between(-180, 180), Help: "longitude in degrees, west negative", Example: "-74.17"},
		{Name: "zone", Kind: Text, Required: true, Help: "time zone of the site", Example: "America/New_York"},
	}, place...)
	add = append(add, freshOption())
	change := append([]Option{
		nameOption("which site", "Quillmere", d.siteOption().Complete), newNameOption(),
		{Name: "lat", Kind: Number, Range: Between(-90, 90), Help: "latitude in degrees, south negative", Example: "40.69"},
		{Name: "lon", Kind: Number, Range: Between(-180, 180), Help: "longitude in degrees, west negative", Example: "-74.17"},
		{Name: "zone", Kind: Text, Help: "time zone of the site", Example: "America/New_York"},
	}, place...)
	change = append(change, Option{Name: "from", Kind: Day, Past: true, Help: "first day of another day rule; all of the record when not given", Example: "2013-01-01"})
	return []Command{
		{Path: "setup site add", Short: "add a site: one course or ground", Who: Lead, Options: add,
			Long:     "A day runs midnight to midnight in standard time all year, so that it always has 24 hours; on a summer clock that is 01:00 to 01:00.",
			Examples: []string{"/setup site add name:Quillmere lat:40.69 lon:-74.17 zone:America/New_York units:c"}, Run: d.runSiteAdd},
		{Path: "setup site change", Short: "change a site, its units or how its days run", Who: Lead, Options: change,
			Examples: []string{"/setup site change name:Quillmere units:f"}, Run: d.runSiteChange},
		{Path: "setup site drop", Short: "drop a site; its record and log are kept", Who: Lead, Asks: true,
			Options:  []Option{nameOption("which site", "Quillmere", d.siteOption().Complete)},
			Examples: []string{"/setup site drop name:Quillmere"}, Run: d.runSiteDrop},
		d.siteRestore(),
		{Path: "setup site list", Short: "the sites and how their days run", Who: Lead, Examples: []string{"/setup site list"}, Run: d.runSiteList},
	}
}

func (d Desk) runSiteAdd(ctx context.Context, req Request) (reply.Reply, error) {
	site := planner.Site{Units: planner.Celsius}
	site.Name, _ = req.Values.Text("name")
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	if err := askFresh(req, setup.Sites, dropped.Sites, siteName, "site", restoreSite); err != nil {
		return reply.Reply{}, err
	}
	rule, err := siteFrom(req, &site, planner.DayRule{Boundary: planner.StandardMidnight}, true)
	if err != nil {
		return reply.Reply{}, err
	}
	site.Rules = planner.Always(rule)
	return d.keptSite(ctx, req, site, "Added")
}

func (d Desk) runSiteChange(ctx context.Context, req Request) (reply.Reply, error) {
	site, err := d.namedSite(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	site.Name = renamed(req.Values, site.Name)
	before := site.Rules.On(planner.DayMax)
	rule, err := siteFrom(req, &site, before, req.Values.Has("zone"))
	if err != nil {
		return reply.Reply{}, err
	}
	if rule != before {
		from, given, err := req.Values.Day("from", req.TodayAt(zoneOf(site)))
		if err != nil {
			return reply.Reply{}, err
		}
		if !given {
			from = planner.DayMin
		}
		site.Rules = site.Rules.With(from, rule)
	}
	return d.keptSite(ctx, req, site, "Changed")
}

// siteFrom reads place, units and day rule into the site. The standard offset
// is taken from the zone when it was just given, unless it is typed.
func siteFrom(req Request, site *planner.Site, rule planner.DayRule, newZone bool) (planner.DayRule, error) {
	if lat, given := req.Values.Number("lat"); given {
		site.Lat = lat
	}
	if lon, given := req.Values.Number("lon"); given {
		site.Lon = lon
	}
	site.Zone = textOr(req.Values, "zone", site.Zone)
	site.Units = planner.Units(textOr(req.Values, "units", string(site.Units)))
	zone, err := site.Location()
	if err != nil {
		return rule, err
	}
	if newZone {
		rule.OffsetSeconds = planner.StandardOffset(zone, req.NowAt(zone).Year())
	}
	if hours, given := req.Values.Number("offset"); given {
		rule.OffsetSeconds = int(hours * 3600)
	}
	rule.Boundary = planner.Boundary(textOr(req.Values, "day", string(rule.Boundary)))
	if hour, given := req.Values.Whole("hour"); given {
		rule.ClosingHour = hour
	}
	if rule.Boundary != planner.FixedHour {
		if req.Values.Has("hour") {
			return rule, req.Invalid("hour", "hour: goes with day:hour")
		}
		rule.ClosingHour = 0
	} else if rule.ClosingHour == 0 {
		return rule, req.Missing("hour")
	}
	switch hours, _ := req.Values.Text("hours"); hours {
	case "00-23":
		rule.FirstSlot = 0
	case "01-24":
		rule.FirstSlot = 1
	}
	return rule, rule.Check()
}

func (d Desk) keptSite(ctx context.Context, req Request, site planner.Site, did string) (reply.Reply, error) {
	zone, err := site.Location()
	if err != nil {
		return reply.Reply{}, err
	}
	said := reply.Of(reply.Textf("%s %s.", did, site.Name), reply.Text(dayRuns(site, zone, req.NowAt(zone).Year())))
	if did == "Added" {
		said.Add(reply.Text("Next:\n/setup surface add name:greens grass:cool"))
	}
	return d.kept(ctx, req.stamp(zone), site, said)
}

// dayRuns says when the site's day runs, also on its summer clock.
func dayRuns(site planner.Site, zone *time.Location, year int) string {
	rule := site.Rules.On(planner.DayMax)
	switch rule.Boundary {
	case planner.CivilMidnight:
		return "A day runs midnight to midnight by the clock on the wall: 23 or 25 hours where clocks change."
	case planner.FixedHour:
		return fmt.Sprintf("A day ends at %02d:00 standard time (UTC%s).", rule.ClosingHour, offsetText(rule.OffsetSeconds))
	}
	text := fmt.Sprintf("A day runs midnight to midnight in standard time (UTC%s) all year", offsetText(rule.OffsetSeconds))
	if planner.StandardOffset(zone, year) != rule.OffsetSeconds {
		return text + "." // the lead's own offset: the zone's clocks say nothing about it
	}
	for _, month := range []time.Month{time.January, time.July} {
		if _, offset := time.Date(year, month, 1, 12, 0, 0, 0, zone).Zone(); offset != rule.OffsetSeconds {
			start := time.Unix(int64(offset-rule.OffsetSeconds), 0).UTC().Format("15:04")
			return text + fmt.Sprintf(": %s to %s on your summer clock.", start, start)
		}
	}
	return text + "."
}

func offsetText(seconds int) string {
	sign := '+'
	if seconds < 0 {
		sign, seconds = '-', -seconds
	}
	return fmt.Sprintf("%c%02d:%02d", sign, seconds/3600, seconds/60%60)
}

// namedSite is the site that name: names.
func (d Desk) namedSite(ctx context.Context, req Request) (planner.Site, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return planner.Site{}, err
	}
	name, _ := req.Values.Text("name")
	return setup.Site(name)
}

func (d Desk) runSiteDrop(ctx context.Context, req Request) (reply.Reply, error) {
	site, err := d.namedSite(ctx, req)
	if err != nil {
		return reply.Reply{}, err
	}
	zone, err := site.Location()
	if err != nil {
		return reply.Reply{}, err
	}
	site.Archived = true
	return d.dropping(ctx, req, req.stamp(zone), site, site.Name, " with all its surfaces and works")
}

func (d Desk) runSiteList(ctx context.Context, req Request) (reply.Reply, error) {
	setup, err := d.Book.Setup(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	var fields reply.Fields
	for _, site := range setup.Sites {
		zone, err := site.Location()
		if err != nil {
			return reply.Reply{}, err
		}
		fields = append(fields, reply.Field{Name: site.Name,
			Value: fmt.Sprintf("%g, %g; %s; %s. %s", site.Lat, site.Lon, site.Zone, site.Units.Degree(), dayRuns(site, zone, req.NowAt(zone).Year()))})
	}
	dropped, err := d.Book.Dropped(ctx)
	if err != nil {
		return reply.Reply{}, err
	}
	list := listed(fields, "There is no site yet. Like: /setup site add name:Quillmere lat:40.69 lon:-74.17 zone:America/New_York")
	return withDropped(list, namesOf(dropped.Sites, restoreSite)), nil
}
