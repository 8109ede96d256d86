package intake

import (
	"fmt"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"swardbook/calc"
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
	hourRole     // the hour of the day alone
	sensorRole   // which of several sensors a row is of
	humidityRole // known and not kept
	rainRole
	rainSumRole // rain of a day so far or a whole day: known and not kept
	likelyRole  // a temperature that is not called the air's
)

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
	{planner.Celsius, " grad c"}, {planner.Celsius, " grad celsius"}, {planner.Celsius, " gr c"}, {planner.Celsius, " st c"},
}

// column is one column of a header.
type column struct {
	index int
	name  string // as written
	role  role
	units planner.Units // "" when the name has none
	// rainMM is what one of the unit of a rain column is in mm; 0 when the name
	// has none.
	rainMM float64
	// zone is what the name of a time says of its zone: "time (UTC)".
	zone    int
	hasZone bool
}

// readColumn looks a column's name up.
func readColumn(index int, name []byte) column {
	found := column{index: index, name: headerText(name)}
	if name, offset, ok := zoneInName(found.name); ok && roleOf(plainName(name)) == timeRole {
		found.role, found.zone, found.hasZone = timeRole, offset, true
		return found
	}
	plain := plainName(found.name)
	for _, unit := range unitEndings {
		if base, ok := strings.CutSuffix(plain, unit.ending); ok {
			plain, found.units = base, unit.units
			break
		}
	}
	if found.role = roleOf(plain); found.role == noRole && likelyTemperature(plain) {
		found.role = likelyRole
	}
	if at := strings.LastIndexByte(plain, ' '); found.role == noRole && at > 0 {
		switch base := roleOf(plain[:at]); base {
		case humidityRole, rainSumRole:
			found.role = base // "humidity percent"
		case rainRole:
			if mm, known := rainUnits[plain[at+1:]]; known {
				found.role, found.rainMM = base, mm // "rain mm"
			}
		}
	}
	if (found.role == timeRole || found.role == hourRole) && found.units != "" {
		found.role = noRole // "time c" is something else
	}
	return found
}

// rainUnits are the units of rain, in mm, as they end a column's name. A rate
// ("rain mm h") is none of them.
var rainUnits = map[string]float64{"mm": 1, "in": calc.MMPerInch, "inch": calc.MMPerInch, "inches": calc.MMPerInch, "cm": 10}

// roleOf is the role of a plain name.
func roleOf(plain string) role {
	for _, known := range columnNames {
		if slices.Contains(known.names, plain) {
			return known.role
		}
	}
	return noRole
}

// zoneInName cuts a zone off the end of a column's name: "Time (UTC)", "Date
// Time, GMT-05:00", "time_utc".
func zoneInName(name string) (rest string, offset int, ok bool) {
	at := strings.LastIndexAny(strings.TrimRight(name, " )]"), " (_,[")
	if at <= 0 || len(name) > 100 {
		return "", 0, false
	}
	offset, ok = zoneNames(nil).offset(strings.Trim(name[at:], " (_,[])"))
	return name[:at], offset, ok
}

// headerText reads a name that may be in windows-1252: "°" is then no UTF-8.
func headerText(name []byte) string {
	if utf8.Valid(name) {
		return strings.TrimSpace(string(name))
	}
	high := []rune(windows1252)
	runes := make([]rune, len(name))
	for i, c := range name {
		if runes[i] = rune(c); c >= 0x80 && c < 0xA0 {
			runes[i] = high[c-0x80]
		}
	}
	return strings.TrimSpace(string(runes))
}

// plainName is the name in lower case without accents, with one space for
// everything that is neither letter nor digit. The ordinals º and ª, which
// unicode calls letters, are taken for the degree sign that they stand for.
func plainName(name string) string {
	return strings.Join(strings.FieldsFunc(accents.Replace(strings.ToLower(name)), func(r rune) bool {
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
	if r == likelyRole {
		return temperatureRole.word()
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

// named returns the column with the name, as written or in plain.
func (h header) named(name string) (column, bool) {
	for _, c := range h.columns {
		if c.name == name || plainName(name) != "" && plainName(c.name) == plainName(name) {
			return c, true
		}
	}
	return column{}, false
}

// of returns the columns of the role.
func (h header) of(wanted role) (columns []column) {
	for _, c := range h.columns {
		if c.role == wanted {
			columns = append(columns, c)
		}
	}
	return columns
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
	if wanted != temperatureRole && wanted != likelyRole {
		return column{}, false, problem.WithHint("Rename all but one, for instance by a word in front: \"other %s\".", all[0].name)
	}
	return column{}, false, askSensor(problem, namesOfColumns(all))
}

func namesOfColumns(columns []column) []string {
	var names []string
	for _, c := range columns {
		names = append(names, cut([]byte(c.name)))
	}
	return names
}

// unitsOf returns the one unit of the columns: what their names say, else
// units, else "". Names that contradict each other or units are refused.
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
