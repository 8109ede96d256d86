package planner

import (
	"path"
	"slices"
	"strings"
	"unicode"
)

// Site returns the site with the name; the only one when the name is empty.
func (s Setup) Site(name string) (Site, error) {
	return pick(s.Sites, func(site Site) string { return site.Name }, "site", "site", name,
		"/setup site add name:Quillmere lat:40.7 lon:-74.2 zone:America/New_York units:c")
}

// Station returns the site's station with the name; its only one when the name
// is empty.
func (s Setup) Station(site Site, name string) (Station, error) {
	return pick(s.StationsOf(site.ID), func(station Station) string { return station.Name }, "station", "station", name,
		"/setup station add name:roof")
}

// Surface returns the site's surface with the name; its only one when the name
// is empty.
func (s Setup) Surface(site Site, name string) (Surface, error) {
	return pick(s.SurfacesOf(site.ID), func(surface Surface) string { return surface.Name }, "surface", "surface", name,
		"/setup surface add name:greens grass:cool")
}

// Work returns the surface's work with the name; its only one when the name is
// empty.
func (s Setup) Work(surface Surface, name string) (Work, error) {
	return pick(s.WorksOn(surface.ID), func(work Work) string { return work.Name }, "work on "+surface.Name, "work", name,
		"/setup work add surface:"+quoted(surface.Name)+" name:regulator counts:degree-days base:0 target:200")
}

// Total returns the site's season total with the name; its only one when the
// name is empty.
func (s Setup) Total(site Site, name string) (Total, error) {
	return pick(s.TotalsOf(site.ID), func(total Total) string { return total.Name }, "season total", "total", name,
		"/setup total add name:gdd10 base:10 from:03-01")
}

// StationsOf returns the site's stations.
func (s Setup) StationsOf(site SiteID) []Station {
	return filter(s.Stations, func(station Station) bool { return station.Site == site })
}

// SurfacesOf returns the site's surfaces.
func (s Setup) SurfacesOf(site SiteID) []Surface {
	return filter(s.Surfaces, func(surface Surface) bool { return surface.Site == site })
}

// WorksOn returns the surface's works.
func (s Setup) WorksOn(surface SurfaceID) []Work {
	return filter(s.Works, func(work Work) bool { return work.Surface == surface })
}

// WorksOf returns the works of all the site's surfaces, surface by surface.
func (s Setup) WorksOf(site SiteID) []Work {
	var works []Work
	for _, surface := range s.SurfacesOf(site) {
		works = append(works, s.WorksOn(surface.ID)...)
	}
	return works
}

// DroppedOf returns the works of the site's surfaces that were dropped.
func (s Setup) DroppedOf(site SiteID) []Work {
	return filter(s.Dropped, func(work Work) bool {
		return slices.ContainsFunc(s.Surfaces, func(surface Surface) bool { return surface.Site == site && surface.ID == work.Surface })
	})
}

// TotalsOf returns the site's season totals.
func (s Setup) TotalsOf(site SiteID) []Total {
	return filter(s.Totals, func(total Total) bool { return total.Site == site })
}

// ClosedOf returns the site's closed days.
func (s Setup) ClosedOf(site SiteID) []Closed {
	return filter(s.Closed, func(closed Closed) bool { return closed.Site == site })
}

// ClosedDays returns the site's closed days with the name; its only ones when
// the name is empty.
func (s Setup) ClosedDays(site Site, name string) (Closed, error) {
	return pick(s.ClosedOf(site.ID), func(closed Closed) string { return closed.Name }, "closed day", "name", name,
		"/setup closed add name:tournament from:2024-07-06 to:2024-07-07")
}

func filter[T any](all []T, keep func(T) bool) []T {
	var out []T
	for _, one := range all {
		if keep(one) {
			out = append(out, one)
		}
	}
	return out
}

// pick finds the one with the name, ignoring case; the only one when no name
// is given. The problem names what there is, and the command that adds one.
func pick[T any](all []T, nameOf func(T) string, what, option, name, add string) (T, error) {
	var none T
	names := make([]string, len(all))
	for i, one := range all {
		names[i] = nameOf(one)
		if name != "" && NameKey(names[i]) == NameKey(name) {
			return one, nil
		}
	}
	switch {
	case len(all) == 0:
		return none, Problemf(NotFound, "There is no %s yet.", what).WithHint("A lead adds one:\n%s", add)
	case name != "":
		return none, Problemf(NotFound, "There is no %s %q.", what, name).WithHint("There is: %s.", strings.Join(names, ", "))
	case len(all) > 1:
		return none, Problemf(Missing, "Which %s?", what).WithHint("Add %s:%s (there is: %s).", option, quoted(names[0]), strings.Join(names, ", "))
	}
	return all[0], nil
}

func quoted(name string) string {
	if strings.Contains(name, " ") {
		return `"` + name + `"`
	}
	return name
}

// stationName makes a station's name out of a file's: its letters and digits,
// the rest as spaces, at most 32 characters.
func stationName(fileName string) string {
	base := path.Base(strings.ReplaceAll(fileName, `\`, "/"))
	if dot := strings.IndexByte(base, '.'); dot > 0 {
		base = base[:dot]
	}
	words := strings.FieldsFunc(base, func(r rune) bool { return !unicode.IsLetter(r) && !unicode.IsDigit(r) })
	runes := []rune(strings.Join(words, " "))
	name := strings.TrimSpace(string(runes[:min(len(runes), 32)]))
	if name == "" {
		return "station"
	}
	return name
}
