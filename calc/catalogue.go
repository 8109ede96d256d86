package calc

// Status says how well a formula's source is known.
type Status string

// The statuses, from the firmest down.
const (
	StatusPrinted        Status = "printed"         // printed in the source and read there
	StatusAbstract       Status = "abstract"        // read in the paper's abstract
	StatusSecondHand     Status = "second-hand"     // read in a copy that names the original
	StatusComputed       Status = "computed"        // follows from a definition, computed and checked
	StatusMemory         Status = "from memory"     // from memory, not yet confirmed in the source
	StatusCommonPractice Status = "common practice" // a fact of the trade, without a source
)

// Formula is one entry of the catalogue. ID is stable and is what other parts
// refer to. Title is a few words. Words is the formula in plain words, one
// paragraph without line breaks, for help texts and notes. Source names where it
// was published, and Status how well that is known.
type Formula struct {
	ID, Title, Words, Source string
	Status                   Status
}

// The sources that several entries share.
const (
	sourceGrowth   = "Gelernter & Stowell 2005, Golf Course Management, March, 108-113"
	sourceUnits    = "international yard and pound of 1959: 1 ft = 0.3048 m, 1 lb = 453.59237 g"
	sourceMcMaster = "McMaster & Wilhelm 1997"
	sourceZalom    = "Zalom et al. 1983"
)

// Origin is the source and how well it is known: "Zalom et al. 1983 (printed)";
// a formula whose only source is common practice says that once.
func (f Formula) Origin() string {
	if f.Source == string(f.Status) {
		return f.Source
	}
	return f.Source + " (" + string(f.Status) + ")"
}

// Catalogue returns an entry for every figure this package can compute, in the
// order to be shown. The slice is the caller's own.
//
// Every [Method] has an entry "degree-days-" + its text, every [Cutoff] but none
// an entry "cutoff-" + its text.
func Catalogue() []Formula {
	var all []Formula
	all = append(all, meanFormulas()...)
	all = append(all, degreeDayFormulas()...)
	all = append(all, cutoffFormulas()...)
	all = append(all, growthFormulas()...)
	all = append(all, weatherFormulas()...)
	all = append(all, unitFormulas()...)
	return append(all, passageFormulas()...)
}

func meanFormulas() []Formula {
	return []Formula{
		{
			ID: "hourly-mean", Title: "24-hour mean",
			Words:  "Add the day's readings, one an hour, and divide by how many there are (24 on an ordinary day).",
			Source: "American Meteorological Society, Glossary of Meteorology: mean daily temperature", Status: StatusPrinted,
		},
		{
			ID: "midrange-mean", Title: "High/low mean",
			Words:  "Add the day's high and low and divide by 2.",
			Source: sourceMcMaster + "; Bernhardt & Carleton 2018, J. Climate 31:979", Status: StatusPrinted,
		},
		{
			ID: "bridged-gap", Title: "Short gap in the readings",
			Words:  "A short gap is filled by a straight line between the readings before and after it. A longer gap is left open.",
			Source: "common practice", Status: StatusCommonPractice,
		},
	}
}

func degreeDayFormulas() []Formula {
	return []Formula{
		{
			ID: "degree-days-" + string(MethodMean), Title: "Degree days from the mean",
			Words:  "The day's mean less the base. A mean below the base counts as the base. With an upper threshold, a mean above it counts as the threshold.",
			Source: sourceMcMaster + ", method 1; that the cap applies to the mean is our reading", Status: StatusAbstract,
		},
		{
			ID: "degree-days-" + string(MethodFlooredExtremes), Title: "Degree days, high and low floored",
			Words:  "A high or low below the base counts as the base. With an upper threshold, one above it counts as the threshold. Then half of high plus low, less the base.",
			Source: sourceMcMaster + ", method 2; the cap is from memory", Status: StatusAbstract,
		},
		{
			ID: "degree-days-" + string(MethodFourCase), Title: "Degree days, four cases",
			Words:  "Low at or above the base: mean less base. Only the low below: half of (high less base), less a quarter of (base less low). Mean below too: a quarter of (high less base). High not above the base: 0.",
			Source: "Met Éireann, page on degree days", Status: StatusPrinted,
		},
		{
			ID: "degree-days-" + string(MethodSingleTriangle), Title: "Degree days, single triangle",
			Words:  "The day runs in a straight line from the low up to the high and back. The area between that line and the base counts.",
			Source: sourceZalom + "; checked by numerical integration", Status: StatusMemory,
		},
		{
			ID: "degree-days-" + string(MethodDoubleTriangle), Title: "Degree days, double triangle",
			Words:  "As the single triangle, but the second half of the day falls to the next day's low. The two halves are averaged.",
			Source: sourceZalom + "; checked by numerical integration", Status: StatusMemory,
		},
		{
			ID: "degree-days-" + string(MethodSingleSine), Title: "Degree days, single sine",
			Words:  "The day runs as one sine wave from the low up to the high and back. The area between the wave and the base counts.",
			Source: "Baskerville & Emin 1969; checked by numerical integration", Status: StatusMemory,
		},
		{
			ID: "degree-days-" + string(MethodDoubleSine), Title: "Degree days, double sine",
			Words:  "As the single sine, but the second half of the day falls to the next day's low. The two halves are averaged.",
			Source: "Allen 1976; checked by numerical integration", Status: StatusMemory,
		},
		{
			ID: "degree-days-" + string(MethodDegreeHours), Title: "Degree days from hours",
			Words:  "For each reading of the day, its degrees above the base, 0 when below. With an upper threshold, a reading above it counts as the threshold. Then the mean of them.",
			Source: "definition: degree-hours / 24", Status: StatusComputed,
		},
	}
}

func cutoffFormulas() []Formula {
	return []Formula{
		{
			ID: "cutoff-" + string(CutoffHorizontal), Title: "Horizontal cutoff",
			Words:  "Above the upper threshold the day counts as if it stayed at the threshold.",
			Source: sourceZalom, Status: StatusMemory,
		},
		{
			ID: "cutoff-" + string(CutoffIntermediate), Title: "Intermediate cutoff",
			Words:  "Above the upper threshold each degree takes away as much as it gave below. A day's sum below 0 counts as 0.",
			Source: sourceZalom + "; the day's sum is floored, not each moment", Status: StatusMemory,
		},
		{
			ID: "cutoff-" + string(CutoffVertical), Title: "Vertical cutoff",
			Words:  "The time above the upper threshold counts nothing.",
			Source: sourceZalom, Status: StatusMemory,
		},
	}
}

func growthFormulas() []Formula {
	return []Formula{
		{
			ID: "growth-potential", Title: "Growth potential",
			Words:  "How many widths the mean temperature lies from the optimum; that number squared and halved; e to the minus of it. 100 % at the optimum, 61 % one width away.",
			Source: sourceGrowth, Status: StatusMemory,
		},
		{
			ID: "growth-potential-held", Title: "Growth potential, held",
			Words:  "As growth potential, but it stays at 100 % above the optimum. For warm-season grass, on request.",
			Source: "a later note by the authors of Gelernter & Stowell 2005", Status: StatusPrinted,
		},
		{
			ID: "growth-potential-hours", Title: "Growth potential over hours",
			Words:  "The growth potential of each reading of the day, then the mean of them. A separate figure: the curve was fitted to means of a day or longer.",
			Source: sourceGrowth + ", averaged over the day", Status: StatusComputed,
		},
		{
			ID: "growth-curve-cool", Title: "Cool-season grass",
			Words:  "Optimum 20 °C, width 5.5 °C.",
			Source: sourceGrowth, Status: StatusMemory,
		},
		{
			ID: "growth-curve-warm", Title: "Warm-season grass",
			Words:  "Optimum 31 °C, width 7 °C.",
			Source: sourceGrowth, Status: StatusMemory,
		},
		{
			ID: "growth-curve-cool-f", Title: "Cool-season grass, °F pair",
			Words:  "Optimum 68 °F, width 10 °F (20 °C and 5.56 °C).",
			Source: sourceGrowth + "; the optimum is printed in a trade article by the same authors", Status: StatusMemory,
		},
		{
			ID: "growth-curve-warm-f", Title: "Warm-season grass, °F pair",
			Words:  "Optimum 88 °F, width 12 °F (31.11 °C and 6.67 °C).",
			Source: sourceGrowth + "; the optimum is printed in a trade article by the same authors", Status: StatusMemory,
		},
		{
			ID: "nitrogen-use", Title: "Nitrogen used in a day",
			Words:  "The day's growth potential times the surface's monthly ceiling, divided by the days in the month.",
			Source: "common practice", Status: StatusCommonPractice,
		},
	}
}

func weatherFormulas() []Formula {
	return []Formula{
		{
			ID: "heat-index", Title: "Heat index",
			Words:  "How hot the air feels in shade, from temperature and relative humidity: a simple formula below 80 °F, a regression above. Full sun adds up to 15 °F. Classes: caution from 80 °F (27 °C), extreme caution 90 (32), danger 103 (39), extreme danger 125 (52).",
			Source: "US National Weather Service, heat index equation page; its classes as others print them", Status: StatusPrinted,
		},
		{
			ID: "hours-below", Title: "Hours below a temperature",
			Words:  "The share of a day that lies below the temperature when it swings from low to high and back as a sine, times 24.",
			Source: "Baskerville & Emin 1969", Status: StatusComputed,
		},
	}
}

func unitFormulas() []Formula {
	return []Formula{
		{
			ID: "unit-temperature", Title: "°C and °F",
			Words:  "°F = °C times 9/5, plus 32. °C = (°F less 32) times 5/9.",
			Source: "definition of the Fahrenheit scale", Status: StatusComputed,
		},
		{
			ID: "unit-degree-days", Title: "°C-days and °F-days",
			Words:  "°F-days = °C-days times 9/5. The 32 has no part in it; the same holds for a difference of temperatures.",
			Source: "definition of the Fahrenheit scale", Status: StatusComputed,
		},
		{
			ID: "unit-kg-per-hectare", Title: "g/m² and kg/ha",
			Words:  "kg/ha = g/m² times 10.",
			Source: "1 ha = 10000 m²", Status: StatusComputed,
		},
		{
			ID: "unit-pounds-per-1000-square-feet", Title: "g/m² and lb/1000 ft²",
			Words:  "1 lb/1000 ft² = 453.59237 g on 92.90304 m², that is 4.88243 g/m².",
			Source: sourceUnits, Status: StatusComputed,
		},
	}
}

func passageFormulas() []Formula {
	return []Formula{
		{
			ID: "first-passage", Title: "Day a total reaches its target",
			Words:  "Add the days one by one. The first day on which the total is at or above the target, both rounded to 6 decimals, is the day.",
			Source: "common practice; the rounding is our own", Status: StatusCommonPractice,
		},
		{
			ID: "nearest-rank", Title: "Early, middle and late date",
			Words:  "Put the dates in order. The early, middle and late ones stand at 10, 50 and 90 % of their number, rounded up to a whole place.",
			Source: "Hyndman & Fan 1996, definition 1", Status: StatusMemory,
		},
	}
}
