package intake

import (
	"fmt"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"swardbook/planner"
)

// role is what a column means to us.
type role int

const (
	noRole role = iota
	timeRole
	temperatureRole
	highRole
	lowRole
	meanRole
)

// columnNames is every column name that is understood, less its unit: lower
// case, everything but letters and digits as one space. "Temp_Max (°F)" is
// looked up as "temp max" in °F. All other columns are left alone.
var columnNames = []struct {
	role  role
	word  string // what a person calls it
	names []string
}{
	{timeRole, "time", []string{
		"time", "date", "datetime", "date time", "timestamp", "time stamp", "valid",
	}},
	{temperatureRole, "temperature", []string{
		"t", "temp", "temperature", "air temp", "air temperature", "airtemp", "temp air", "temperature air",
		"dry bulb", "dry bulb temp", "dry bulb temperature",
		"outdoor temp", "outdoor temperature", "outside temp", "outside temperature",
	}},
	{highRole, "high", []string{
		"high", "max", "maximum", "tmax", "t max", "tempmax", "temp max", "max temp", "high temp", "temp high",
		"temperature max", "max temperature", "maximum temperature", "high temperature", "temperature high",
		"air temp max", "max air temp", "maximum air temperature",
	}},
	{lowRole, "low", []string{
		"low", "min", "minimum", "tmin", "t min", "tempmin", "temp min", "min temp", "low temp", "temp low",
		"temperature min", "min temperature", "minimum temperature", "low temperature", "temperature low",
		"air temp min", "min air temp", "minimum air temperature",
	}},
	{meanRole, "mean", []string{
		"mean", "avg", "average", "tmean", "t mean", "tmean24", "tavg", "t avg", "tempmean", "temp mean", "mean temp",
		"temp avg", "avg temp", "average temp", "mean24", "mean 24",
		"temperature mean", "mean temperature", "average temperature", "temperature avg",
		"air temp mean", "mean air temp", "mean air temperature",
	}},
}

// unitEndings is what may stand at the end of a column's name, written as
// columnNames are: "(°C)" is "c", "[deg F]" is "deg f".
var unitEndings = []struct {
	units  planner.Units
	ending string
}{
	{planner.Celsius, " deg c"}, {planner.Celsius, " degrees c"}, {planner.Celsius, " degc"},
	{planner.Celsius, " c"}, {planner.Celsius, " celsius"},
	{planner.Fahrenheit, " deg f"}, {planner.Fahrenheit, " degrees f"}, {planner.Fahrenheit, " degf"},
	{planner.Fahrenheit, " f"}, {planner.Fahrenheit, " fahrenheit"},
}

// column is one column of a header.
type column struct {
	index int
	name  string // as written
	role  role
	units planner.Units // "" when the name has none
}

// readColumn looks a column's name up.
func readColumn(index int, name []byte) column {
	found := column{index: index, name: headerText(name)}
	plain := plainName(found.name)
	for _, unit := range unitEndings {
		if base, ok := strings.CutSuffix(plain, unit.ending); ok {
			plain, found.units = base, unit.units
			break
		}
	}
	for _, known := range columnNames {
		if slices.Contains(known.names, plain) {
			found.role = known.role
		}
	}
	if found.role == timeRole && found.units != "" {
		found.role = noRole // "time c" is something else
	}
	return found
}

// headerText reads a name that may be in Latin-1: "°" is then no UTF-8.
func headerText(name []byte) string {
	if utf8.Valid(name) {
		return strings.TrimSpace(string(name))
	}
	runes := make([]rune, len(name))
	for i, c := range name {
		runes[i] = rune(c)
	}
	return strings.TrimSpace(string(runes))
}

// plainName is the name in lower case with one space for everything that is
// neither letter nor digit. The ordinals º and ª, which unicode calls letters,
// are taken for the degree sign that they stand for.
func plainName(name string) string {
	return strings.Join(strings.FieldsFunc(strings.ToLower(name), func(r rune) bool {
		return r == 'º' || r == 'ª' || !unicode.IsLetter(r) && !unicode.IsDigit(r)
	}), " ")
}

// word is what a person calls the role.
func (r role) word() string {
	for _, known := range columnNames {
		if known.role == r {
			return known.word
		}
	}
	return "other"
}

// header is a header line understood.
type header struct {
	columns []column
}

// has reports whether any column has the role.
func (h header) has(wanted role) bool {
	return slices.ContainsFunc(h.columns, func(c column) bool { return c.role == wanted })
}

// pick returns the column of the role. Of several (temp_c, temp_f) the one in
// the units counts, °C when units is ""; more than one of those is refused. ok
// is false when there is none.
func (h header) pick(wanted role, units planner.Units) (picked column, ok bool, err error) {
	var all, fitting []column
	for _, c := range h.columns {
		if c.role != wanted {
			continue
		}
		all = append(all, c)
		if c.units == units || c.units == planner.Celsius && units == "" {
			fitting = append(fitting, c)
		}
	}
	switch {
	case len(all) == 0:
		return column{}, false, nil
	case len(all) == 1:
		return all[0], true, nil
	case len(fitting) == 1:
		return fitting[0], true, nil
	}
	problem := planner.Problemf(planner.Refused, "the columns %s could each be the %s", quoteNames(all), wanted.word())
	if wanted == timeRole {
		return column{}, false, problem.WithHint("Keep one column, with the date and the time of day together: 2013-07-01T05:00.")
	}
	return column{}, false, problem.
		WithHint("Rename all but one, for instance by a word in front: \"other %s\".", all[0].name)
}

// unitsOf returns the one unit of the columns: what their names say, else
// units, else °C. Names that contradict each other or units are refused.
func unitsOf(columns []column, units planner.Units) (planner.Units, error) {
	var named column
	for _, c := range columns {
		if c.units == "" {
			continue
		}
		if named.units != "" && named.units != c.units {
			return "", planner.Problemf(planner.Refused, "the columns %s are in different units", quoteNames([]column{named, c})).
				WithHint("Write all temperatures of a file in one unit.")
		}
		named = c
	}
	switch {
	case named.units == "" && units == "":
		return planner.Celsius, nil
	case named.units == "":
		return units, nil
	case units != "" && units != named.units:
		return "", planner.Problemf(planner.Refused, "the column %q is in %s, but %s was asked for", cut([]byte(named.name)), degrees(named.units), degrees(units)).
			WithHint("Leave units out to read the file as its header says, or correct the header.")
	}
	return named.units, nil
}

func degrees(units planner.Units) string {
	if units == planner.Fahrenheit {
		return "°F"
	}
	return "°C"
}

// shownColumns is how many names a message lists.
const shownColumns = 12

func quoteNames(columns []column) string {
	var names []string
	for i, c := range columns {
		if i == shownColumns {
			names = append(names, fmt.Sprintf("and %d more", len(columns)-i))
			break
		}
		names = append(names, fmt.Sprintf("%q", cut([]byte(c.name))))
	}
	return strings.Join(names, ", ")
}
