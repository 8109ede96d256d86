package workbook

import (
	"fmt"
	"strings"

	"swardbook/calc"
)

// CellText is the formula of a catalogue entry as the cells of the sheet "days"
// hold it, for the row 2: A the date, G the 24-hour mean, I and J the high and
// low, K the next low, with base, upper, optimum, width and ceiling as names.
// Entries that no cell computes say so. ok is false for an id that the
// catalogue lacks.
func CellText(id string) (text string, ok bool) {
	base, upper := "base", "upper"
	method := calc.Method(strings.TrimPrefix(id, "degree-days-"))
	cutoff := calc.Cutoff(strings.TrimPrefix(id, "cutoff-"))
	switch {
	case string(method) != id && method == calc.MethodDegreeHours:
		return "as issued: the hours of a day are not in the sheet", true
	case string(method) != id && len(method.Cutoffs()) > 0:
		return degreeDayText(method, calc.CutoffNone, dayCells{"G2", "I2", "J2", "K2"}, base, upper), true
	case string(cutoff) != id:
		return degreeDayText(calc.MethodSingleSine, cutoff, dayCells{"G2", "I2", "J2", "K2"}, base, upper), true
	}
	text, ok = map[string]string{
		"hourly-mean":                      "an input",
		"midrange-mean":                    midrangeText(2),
		"bridged-gap":                      "in the readings, before the sheet",
		"growth-potential":                 growthText("G2", "optimum", "width", false),
		"growth-potential-held":            growthText("G2", "optimum", "width", true),
		"growth-potential-hours":           "not in this sheet",
		"growth-curve-cool":                "optimum and width, inputs",
		"growth-curve-warm":                "optimum and width, inputs",
		"growth-curve-cool-f":              "optimum and width, inputs",
		"growth-curve-warm-f":              "optimum and width, inputs",
		"nitrogen-use":                     nitrogenText("growth", "ceiling", "A2"),
		"heat-index":                       "not in this sheet",
		"hours-below":                      "not in this sheet",
		"unit-temperature":                 "applied before the sheet was written",
		"unit-degree-days":                 "applied before the sheet was written",
		"unit-kg-per-hectare":              "not in this sheet",
		"unit-pounds-per-1000-square-feet": "not in this sheet",
		"first-passage":                    passageText("d_date", "total", "", "target", "last"),
		"nearest-rank":                     "issued curves of totals, sheet curves",
	}[id]
	return text, ok
}

// dayCells are the cells of a day that a method reads.
type dayCells struct{ mean, high, low, next string }

// midrangeText is the high/low mean of the day's row; empty without both.
func midrangeText(row int) string {
	return fmt.Sprintf(`IF(COUNT(B%[1]d:C%[1]d)=2,(B%[1]d+C%[1]d)/2,"")`, row)
}

// growthText is growth potential of the mean; 0 for a day without one.
func growthText(mean, optimum, width string, held bool) string {
	at := mean
	if held {
		at = fmt.Sprintf("MIN(%s,%s)", mean, optimum)
	}
	return fmt.Sprintf("IF(COUNT(%s)=0,0,EXP(-0.5*((%s-%s)/%s)^2))", mean, at, optimum, width)
}

// nitrogenText is the nitrogen that a day's growth uses.
func nitrogenText(growth, ceiling, date string) string {
	return fmt.Sprintf("%s*%s/DAY(EOMONTH(%s,0))", growth, ceiling, date)
}

// degreeDayText is the day's degree days by the method; 0 for a day of which
// nothing is known.
func degreeDayText(method calc.Method, cutoff calc.Cutoff, day dayCells, base, upper string) string {
	cuts := cutoff != "" && cutoff != calc.CutoffNone
	capped := func(cell string) string {
		if cuts {
			cell = fmt.Sprintf("MIN(%s,%s)", upper, cell)
		}
		return fmt.Sprintf("MAX(%s,%s)", base, cell)
	}
	h, l, n := day.high, day.low, day.next
	text := ""
	switch method {
	case "", calc.MethodMean:
		return fmt.Sprintf("IF(COUNT(%s)=0,0,%s-%s)", day.mean, capped(day.mean), base)
	case calc.MethodFlooredExtremes:
		text = fmt.Sprintf("(%s+%s)/2-%s", capped(h), capped(l), base)
	case calc.MethodFourCase:
		text = fmt.Sprintf("IF(%[3]s<=%[2]s,(%[1]s+%[2]s)/2-%[3]s,IF(%[1]s<=%[3]s,0,IF((%[1]s+%[2]s)/2>=%[3]s,(%[1]s-%[3]s)/2-(%[3]s-%[2]s)/4,(%[1]s-%[3]s)/4)))", h, l, base)
	case calc.MethodDoubleSine, calc.MethodDoubleTriangle:
		second := curveText(method, cutoff, fmt.Sprintf("MAX(%s,%s)", h, n), fmt.Sprintf("MIN(%s,%s)", h, n), base, upper)
		text = fmt.Sprintf("MAX(0,((%s)+(%s))/2)", curveText(method, cutoff, h, l, base, upper), second)
	default: // the single curves; degree-hours without hours stand on the sine
		text = fmt.Sprintf("MAX(0,%s)", curveText(method, cutoff, h, l, base, upper))
	}
	return fmt.Sprintf("IF(COUNT(%s,%s)<2,0,%s)", h, l, text)
}

// curveText is a day's total under the curve with the cutoff, not floored.
func curveText(method calc.Method, cutoff calc.Cutoff, h, l, base, upper string) string {
	area, share := sineText, sineShareText
	if method == calc.MethodSingleTriangle || method == calc.MethodDoubleTriangle {
		area, share = triangleText, triangleShareText
	}
	below := area(h, l, base)
	switch cutoff {
	case calc.CutoffHorizontal:
		return below + "-" + area(h, l, upper)
	case calc.CutoffIntermediate:
		return below + "-2*" + area(h, l, upper)
	case calc.CutoffVertical:
		return fmt.Sprintf("%s-%s-(%s-%s)*%s", below, area(h, l, upper), upper, base, share(h, l, upper))
	}
	return below
}

// sineText is the area of the day's sine above the threshold (Baskerville and
// Emin 1969): with cos(asin x) = sqrt(1 - x²) it needs one acos.
func sineText(h, l, at string) string {
	return fmt.Sprintf("IF(%[3]s>=%[1]s,0,IF(%[3]s<=%[2]s,(%[1]s+%[2]s)/2-%[3]s,(((%[1]s+%[2]s)/2-%[3]s)*ACOS((2*%[3]s-%[1]s-%[2]s)/(%[1]s-%[2]s))+SQRT((%[1]s-%[3]s)*(%[3]s-%[2]s)))/PI()))", h, l, at)
}

func sineShareText(h, l, at string) string {
	return fmt.Sprintf("IF(%[3]s>=%[1]s,0,IF(%[3]s<=%[2]s,1,ACOS((2*%[3]s-%[1]s-%[2]s)/(%[1]s-%[2]s))/PI()))", h, l, at)
}

func triangleText(h, l, at string) string {
	return fmt.Sprintf("IF(%[3]s>=%[1]s,0,IF(%[3]s<=%[2]s,(%[1]s+%[2]s)/2-%[3]s,(%[1]s-%[3]s)^2/(%[1]s-%[2]s)/2))", h, l, at)
}

func triangleShareText(h, l, at string) string {
	return fmt.Sprintf("IF(%[3]s>=%[1]s,0,IF(%[3]s<=%[2]s,1,(%[1]s-%[3]s)/(%[1]s-%[2]s)))", h, l, at)
}

// beyond is what a date cell says when the target is not reached.
const beyond = "beyond this sheet"

// passageText is the first date on which the total, plus shift, reaches the
// target, both rounded to 6 decimals; the last date when nothing is to reach.
func passageText(dates, totals, shift, target, last string) string {
	first := fmt.Sprintf("SUMPRODUCT(MIN(%s+1000000*(ROUND(%s%s,6)<ROUND(%s,6))))", dates, totals, shift, target)
	return fmt.Sprintf(`IF(ROUND(%s,6)<=0,%s,IF(%s>=1000000,"%s",%s))`, target, last, first, beyond, first)
}
