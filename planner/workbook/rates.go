package workbook

import (
	"fmt"
	"math"
	"strconv"

	"swardbook/planner"
)

// area is the surface's area in the unit of the site.
func (b *book) area(surface planner.Surface) float64 {
	return surface.AreaM2 / b.units.Amounts(planner.MassRate).PerArea
}

// placeRate names the inputs of a work's rate; there are none where no rate was
// logged.
func (b *book) placeRate(work planner.SheetWork, row int) {
	if work.Rate.Value <= 0 {
		return
	}
	b.input(workName(work, "rate"), worksSheet, "T", row, b.rate(work.Rate))
	if work.Rate.Kind == planner.MassRate {
		b.input(workName(work, "n"), worksSheet, "V", row, work.Rate.NPercent)
	}
}

// rate is a rate in the unit of the site.
func (b *book) rate(rate planner.Rate) float64 {
	return rate.Value / b.units.Amounts(rate.Kind).PerRate
}

// amount is what the whole surface takes at the last logged rate; ok is false
// without a rate or an area.
func (b *book) amount(work planner.SheetWork) (total float64, ok bool) {
	area := b.area(work.State.Surface)
	if work.Rate.Value <= 0 || area <= 0 {
		return 0, false
	}
	return tidy(b.rate(work.Rate)) * tidy(area) / b.units.Amounts(work.Rate.Kind).Divisor, true
}

// amounts are the cells S to Z: the rate, the area, and what the area takes.
func (b *book) amounts(work planner.SheetWork, c, r int) []any {
	cell := func(col string) string { return fmt.Sprintf("%s%d", col, r) }
	rate, surface := work.Rate, work.State.Surface
	if rate.Value <= 0 {
		var cells []any
		for range 8 {
			cells = append(cells, b.value(plainText, ""))
		}
		return cells
	}
	units := b.units.Amounts(rate.Kind)
	total, known := b.amount(work)
	area := areaName(surface)
	words := map[planner.RateKind]string{planner.NutrientRate: "nitrogen", planner.MassRate: "product", planner.VolumeRate: "liquid product"}
	input := func(name string, value float64) any {
		if c > 0 {
			return b.live(twoDecimals, workName(work, name), value)
		}
		return b.value(inTwo, value)
	}
	percent, nitrogen := any(b.value(plainText, "")), any(b.value(plainText, ""))
	if rate.Kind == planner.MassRate {
		percent = input("n", rate.NPercent)
		nitrogen = b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(%[1]s,%[2]s)=2,%[1]s*%[2]s/100,"")`, cell("X"), cell("V")), orBlank(total*rate.NPercent/100, known))
	}
	return []any{
		b.value(plainText, words[rate.Kind]), input("rate", b.rate(rate)), b.value(plainText, units.Rate), percent,
		b.live(whole, fmt.Sprintf(`IF(COUNT(%[1]s)=1,IF(%[1]s>0,%[1]s,""),"")`, area), orBlank(b.area(surface), surface.AreaM2 > 0)),
		b.live(twoDecimals, fmt.Sprintf(`IF(COUNT(%[1]s,%[2]s)=2,IF(%[1]s>0,%[1]s*%[2]s/%[3]g,""),"")`, cell("T"), cell("W"), units.Divisor), orBlank(total, known)),
		b.value(plainText, units.Total), nitrogen,
	}
}

// roundedText rounds an amount as roundedWords does: to a tenth from 100 on, to
// a thousandth below 1, else to a hundredth.
func roundedText(cell string) string {
	return fmt.Sprintf("ROUND(%[1]s,IF(%[1]s<1,3,IF(%[1]s<100,2,1)))", cell)
}

func roundedWords(value float64) string {
	scale := 100.0
	switch {
	case value < 1:
		scale = 1000
	case value >= 100:
		scale = 10
	}
	// A half goes up as it does in a spreadsheet, which looks at 15 digits.
	scaled, _ := strconv.ParseFloat(strconv.FormatFloat(value*scale, 'g', 15, 64), 64)
	return strconv.FormatFloat(math.Floor(scaled+0.5)/scale, 'f', -1, 64)
}

// takesText says what the surface takes of the work's product: "77.28 kg", for
// the row r of works and log; "" without an amount.
func takesText(r int) string {
	amount := fmt.Sprintf("'%s'!X%d", worksSheet, r)
	return fmt.Sprintf(`IF(ISNUMBER(%[1]s),%[2]s&" "&'%[3]s'!Y%[4]d,"")`, amount, roundedText(amount), worksSheet, r)
}

func (b *book) takesWords(work planner.SheetWork) string {
	total, ok := b.amount(work)
	if !ok {
		return ""
	}
	return roundedWords(total) + " " + b.units.Amounts(work.Rate.Kind).Total
}

// rateText says what the surface takes, and at which rate: "77.28 kg at the
// last logged rate, 14 g/m² at 21 % N".
func (b *book) rateText(work planner.SheetWork, r int) string {
	from := func(col string) string { return fmt.Sprintf("'%s'!%s%d", worksSheet, col, r) }
	return fmt.Sprintf(`IF(ISNUMBER(%[1]s),%[2]s&IF(%[3]s," at "," at the last logged rate, ")&%[4]s&" "&%[5]s&IF(COUNT(%[6]s)=1,IF(%[6]s>0," at "&%[7]s&" %% N",""),""),"")`,
		from("X"), takesText(r), b.changed(workName(work, "rate"), workName(work, "n")), roundedText(from("T")), from("U"), from("V"), roundedText(from("V")))
}

func (b *book) rateWords(work planner.SheetWork) string {
	text := b.takesWords(work)
	if text == "" {
		return ""
	}
	text += " at the last logged rate, " + roundedWords(b.rate(work.Rate)) + " " + b.units.Amounts(work.Rate.Kind).Rate
	if work.Rate.Kind == planner.MassRate && work.Rate.NPercent > 0 {
		text += " at " + roundedWords(work.Rate.NPercent) + " % N"
	}
	return text
}

// between stands before each of several works in a cell; the first is cut.
const between = "; "

// workWords name the work, productWords name it with what the surface takes, as
// they stand in a list of what falls due.
func workWords(work planner.SheetWork) string {
	return between + work.State.Surface.Name + " " + work.State.Work.Name
}

func (b *book) productWords(work planner.SheetWork) string {
	takes := b.takesWords(work)
	if takes == "" {
		return ""
	}
	return between + work.State.Surface.Name + " " + work.State.Work.Name + " " + takes
}

// words are the cells AF and AG: the work, and what the surface takes of it.
func (b *book) words(work planner.SheetWork, r int) []any {
	name := fmt.Sprintf(`A%[1]d&" "&B%[1]d`, r)
	amount := fmt.Sprintf("X%d", r)
	return []any{b.live(plainText, fmt.Sprintf("%q&%s", between, name), workWords(work)),
		b.live(plainText, fmt.Sprintf(`IF(ISNUMBER(%s),%q&%s&" "&%s&" "&Y%d,"")`, amount, between, name, roundedText(amount), r), b.productWords(work))}
}
