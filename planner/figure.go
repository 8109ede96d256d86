package planner

// Unit is the unit of a figure. Inside, figures are °C, g/m² and days; a site
// that shows °F converts at the edge.
type Unit string

// The units of figures.
const (
	DegreesC    Unit = "°C"      // a temperature
	DifferenceC Unit = "°C diff" // a difference of temperatures
	DegreeDays  Unit = "°C-days" // accumulated temperature
	GrowthDays  Unit = "growth days"
	Share       Unit = "share" // 0 to 1, printed as percent
	NitrogenGM2 Unit = "g N/m²"
	Days        Unit = "days"
	Count       Unit = "count"
	Date        Unit = "date"

	Hours           Unit = "h"
	Percent         Unit = "%"
	Millimetres     Unit = "mm"
	MetresPerSecond Unit = "m/s"
)

// Figure is one computed number or date: what text, tables, JSON and cells are
// read from.
type Figure struct {
	Key   string  // dotted, stable: "due.greens.regulator.hourly.total"
	Value float64 // of a Date: the Day's number
	Unit  Unit
	Basis Basis
	Notes []string // what a reader must know to trust it: "2 days missing"
}

// Figures is an ordered list of figures; keys are unique.
type Figures []Figure

// Get returns the figure with the key.
func (f Figures) Get(key string) (Figure, bool) {
	for _, figure := range f {
		if figure.Key == key {
			return figure, true
		}
	}
	return Figure{}, false
}

// value is the figure's value; 0 for one that is not there.
func (f Figures) value(key string) float64 {
	figure, _ := f.Get(key)
	return figure.Value
}

// Under returns the figures with the prefix put before each key, as a what-if
// does with "base." and "whatif.".
func (f Figures) Under(prefix string) Figures {
	out := make(Figures, len(f))
	for i, figure := range f {
		figure.Key = prefix + figure.Key
		out[i] = figure
	}
	return out
}
