package workbook

import (
	"fmt"

	"swardbook/calc"
)

// notes writes what the words mean, and the formulas with their sources.
func (b *book) notes(p *page) error {
	for i, wide := range []float64{26, 70, 44, 70} {
		if err := p.SetColWidth(i+1, i+1, wide); err != nil {
			return err
		}
	}
	if _, err := p.add(b.value(title, "Notes")); err != nil {
		return err
	}
	id := fmt.Sprintf("swardbook-sheet-%d-form-%d", b.ID, Form)
	for _, line := range [][2]string{
		{"sheet", id},
		{"path", "The days ahead that this sheet computes on: typed days first, then the mean of past years."},
		{"likely", "Early to late: eight years in ten fell between them. They stand on curves issued with the sheet. Another target, last date, least days " +
			"between or feed at once moves them; once a day, a base, a limit, the grass or slow nitrogen is changed, or a count starts on the morning or later, " +
			"or over days that the record lacks, only the bot can tell them."},
		{askTheBot, "The sheet cannot tell it any more: /whatif does."},
		{"how it stood", "In words as of the morning; the numbers beside it follow what you type."},
		{"product", "What the whole surface takes at the last logged rate, or at the rate typed in works and log; empty without a rate or an area. " +
			"Swardbook prescribes no rate: the label's is the law."},
		{"nitrogen", "As issued: what was used before the sheet's first day, the day the season began, what is set aside. The rest follows the feeds, the days and the grass."},
		{"days ahead", b.Ahead},
		{"beyond this sheet", "The total does not reach its target on the days of this sheet."},
		{"growth", "Growth potential knows temperature only: not water, shade, wear or disease."},
		{"cautions", b.Caution},
		{"", "Swardbook plans dates; it prescribes no product and no rate."},
	} {
		if _, err := p.add(b.value(wrapped, line[0]), b.value(wrapped, line[1])); err != nil {
			return err
		}
	}
	if _, err := p.add(); err != nil {
		return err
	}
	if _, err := p.add(b.heads("formula", "in words", "source", "in the cells")...); err != nil {
		return err
	}
	for _, formula := range calc.Catalogue() {
		text, _ := CellText(formula.ID)
		if _, err := p.add(b.value(wrapped, formula.Title), b.value(wrapped, formula.Words),
			b.value(wrapped, formula.Origin()), b.value(wrapped, text)); err != nil {
			return err
		}
	}
	return nil
}
