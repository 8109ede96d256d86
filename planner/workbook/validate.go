package workbook

import (
	"fmt"

	"github.com/xuri/excelize/v2"

	"swardbook/planner"
)

// kind is what an input takes.
type kind struct {
	of              excelize.DataValidationType
	lowest, highest float64
	what            string // "number from 0 to 20": as the refusal names it
}

func numbers(lowest, highest float64) kind {
	return kind{excelize.DataValidationTypeDecimal, lowest, highest, fmt.Sprintf("a number from %g to %g", lowest, highest)}
}

func wholes(lowest, highest float64) kind {
	return kind{excelize.DataValidationTypeWhole, lowest, highest, fmt.Sprintf("a whole number from %g to %g", lowest, highest)}
}

func texts(longest float64) kind {
	return kind{excelize.DataValidationTypeTextLength, 0, longest, fmt.Sprintf("at most %g letters", longest)}
}

// dates take the years 2000 to 2100.
func dates() kind {
	return kind{excelize.DataValidationTypeDate, serial(planner.DayOf(2000, 1, 1)), serial(planner.DayOf(2100, 12, 31)),
		"a date in the years 2000 to 2100"}
}

// temperatures take what a site's thermometer may show.
func (b *book) temperatures() kind {
	return numbers(b.units.Temperature(planner.LowestC), b.units.Temperature(planner.HighestC))
}

// takes lets the inputs of the cells take one kind of thing. The prompt says
// what stands in them. No cells are passed over.
func (p *page) takes(col string, first, last int, kind kind, prompt string) error {
	if last < first {
		return nil
	}
	rule := excelize.NewDataValidation(true)
	rule.SetSqref(fmt.Sprintf("%[1]s%[2]d:%[1]s%[3]d", col, first, last))
	plain := func(value float64) string { return fmt.Sprintf("%.9g", value) }
	if err := rule.SetRange(plain(kind.lowest), plain(kind.highest), kind.of, excelize.DataValidationOperatorBetween); err != nil {
		return err
	}
	rule.SetInput("Input", prompt)
	rule.SetError(excelize.DataValidationErrorStyleStop, "This cannot be", "Give "+kind.what+".")
	p.rules = append(p.rules, rule)
	return nil
}
