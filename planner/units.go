package planner

import (
	"strconv"

	"swardbook/calc"
)

// Units says in which temperature unit a site reads and types. Inside, all is
// in °C; the unit matters at the edge only.
type Units string

// The temperature units of a site.
const (
	Celsius    Units = "c"
	Fahrenheit Units = "f"
)

// Degree is the sign of the unit: °C or °F.
func (u Units) Degree() string {
	if u == Fahrenheit {
		return "°F"
	}
	return "°C"
}

// Temperature is a temperature in °C as the site shows it.
func (u Units) Temperature(c float64) float64 {
	if u == Fahrenheit {
		return calc.FahrenheitFromCelsius(c)
	}
	return c
}

// TemperatureC is a temperature typed in the site's unit, in °C.
func (u Units) TemperatureC(typed float64) float64 {
	if u == Fahrenheit {
		return calc.CelsiusFromFahrenheit(typed)
	}
	return typed
}

// Difference is a difference of temperatures, or degree days, in °C as the
// site shows it. Nothing is subtracted: 1 °C of difference is 1.8 °F.
func (u Units) Difference(c float64) float64 {
	if u == Fahrenheit {
		return calc.FahrenheitDegreesFromCelsius(c)
	}
	return c
}

// DifferenceC is a difference of temperatures, or degree days, typed in the
// site's unit, in °C.
func (u Units) DifferenceC(typed float64) float64 {
	if u == Fahrenheit {
		return calc.CelsiusDegreesFromFahrenheit(typed)
	}
	return typed
}

// Show is a value and the name of its unit as the site shows them.
func (u Units) Show(value float64, unit Unit) (shown float64, name string) {
	switch unit {
	case DegreesC:
		return u.Temperature(value), u.Degree()
	case DifferenceC:
		return u.Difference(value), u.Degree()
	case DegreeDays:
		return u.Difference(value), u.Degree() + "-days"
	case Share:
		return 100 * value, "%"
	}
	return value, string(unit)
}

// Counted is the name of a running total's unit as the site shows it, of degree
// days with their base: "°C-days base 10".
func (u Units) Counted(unit Unit, counting Counting) string {
	_, name := u.Show(0, unit)
	if counting.Counts == ByDegreeDays {
		name += " base " + number(u.Temperature(counting.Thresholds.LowerC))
	}
	return name
}

// number writes a value with as few digits as it needs, at most two decimals;
// what rounds to nothing is "0", without a sign.
func number(value float64) string {
	text := strconv.FormatFloat(value, 'f', 2, 64)
	for text[len(text)-1] == '0' {
		text = text[:len(text)-1]
	}
	if text[len(text)-1] == '.' {
		text = text[:len(text)-1]
	}
	if text == "-0" {
		return "0"
	}
	return text
}
