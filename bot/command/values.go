package command

import (
	"slices"
	"strings"

	"swardbook/planner"
)

// Values are the options given with a command, already checked for form. An
// option that was not given, or has another kind, comes back as not given.
type Values struct{ given map[string]value }

// value is one option given.
type value struct {
	option  *Option
	text    string // canonical text
	number  float64
	numbers []float64
	unit    planner.Units
	day     dayWords
	clock   string // behind the day, like 06:10; empty when none was given
	month   planner.MonthDay
	yes     bool
}

// Degrees is a number of degrees, or of what a target counts, as typed. Unit
// is empty when neither c nor f was typed: then it is the site's.
type Degrees struct {
	Value float64
	Unit  planner.Units
}

func (v Values) of(name string, kinds ...Kind) (value, bool) {
	given, ok := v.given[name]
	if !ok {
		return value{}, false
	}
	for _, kind := range kinds {
		if given.option.Kind == kind {
			return given, true
		}
	}
	return value{}, false
}

// without are the values but for the named options.
func (v Values) without(names []string) Values {
	left := make(map[string]value, len(v.given))
	for name, given := range v.given {
		if !slices.Contains(names, name) {
			left[name] = given
		}
	}
	return Values{left}
}

// Has says whether the option was given.
func (v Values) Has(name string) bool {
	_, given := v.given[name]
	return given
}

// Text is the value as text, of any kind.
func (v Values) Text(name string) (string, bool) {
	given, ok := v.given[name]
	return given.text, ok
}

// Names is the list of a Names option, or the single name of a Name option.
func (v Values) Names(name string) ([]string, bool) {
	given, ok := v.of(name, Names, Name)
	if !ok {
		return nil, false
	}
	return splitNames(given.text), true
}

// Number is the value of a Number or Whole option.
func (v Values) Number(name string) (float64, bool) {
	given, ok := v.of(name, Number, Whole)
	return given.number, ok
}

// Whole is the value of a Whole option.
func (v Values) Whole(name string) (int, bool) {
	given, ok := v.of(name, Whole)
	return int(given.number), ok
}

// Numbers is the list of a Numbers option, at least one number.
func (v Values) Numbers(name string) ([]float64, bool) {
	given, ok := v.of(name, Numbers)
	return append([]float64(nil), given.numbers...), ok
}

// Day is the value of a Day option for a site whose calendar shows today. The
// error, a *planner.Problem, says that the day is outside the years that can
// be kept, or does not fall on the weekday that was typed with it.
func (v Values) Day(name string, today planner.Day) (day planner.Day, given bool, err error) {
	found, ok := v.of(name, Day)
	if !ok {
		return 0, false, nil
	}
	day, ok = found.day.on(today, found.option.Past)
	if !ok {
		return 0, true, planner.Problemf(planner.Invalid, "%q is outside the years 1700 to 2299", found.text)
	}
	return day, true, found.day.misfit(day)
}

// Clock is the time behind the value of a Day option that takes one, like
// 06:10.
func (v Values) Clock(name string) (string, bool) {
	given, ok := v.of(name, Day)
	return given.clock, ok && given.clock != ""
}

// MonthDay is the value of a MonthDay option.
func (v Values) MonthDay(name string) (planner.MonthDay, bool) {
	given, ok := v.of(name, MonthDay)
	return given.month, ok
}

// Degrees is the value of a Temperature, Warming or Target option, in the unit
// that was typed.
func (v Values) Degrees(name string) (Degrees, bool) {
	given, ok := v.of(name, Temperature, Warming, Target)
	return Degrees{given.number, given.unit}, ok
}

// Yes is the value of a Yes option.
func (v Values) Yes(name string) (yes, given bool) {
	found, ok := v.of(name, Yes)
	return found.yes, ok
}

// File is the name that a File option gives; Request.Open opens it.
func (v Values) File(name string) (string, bool) {
	given, ok := v.of(name, File)
	return given.text, ok
}

// splitNames cuts a list of names at its commas.
func splitNames(text string) []string {
	parts := strings.Split(text, ",")
	for i := range parts {
		parts[i] = strings.TrimSpace(parts[i])
	}
	return parts
}
