package workbook

import "github.com/xuri/excelize/v2"

// style is the look of a cell.
type style int

// The looks. Inputs stand unlocked, on a fill and inside a border.
const (
	plainText style = iota
	title
	head
	small
	wrapped
	oneDecimal
	twoDecimals
	percent
	whole
	date
	strong     // a key number's date
	room       // empty, to write in
	inNumber   // input
	inTwo      // input, two decimals
	inDate     // input
	everything // how many
)

const (
	dayFormat  = "[$-809]ddd d mmm"
	dateFormat = "yyyy-mm-dd"
)

func (b *book) makeStyles() error {
	line := []excelize.Border{{Type: "left", Style: 1, Color: "808080"}, {Type: "right", Style: 1, Color: "808080"},
		{Type: "top", Style: 1, Color: "808080"}, {Type: "bottom", Style: 1, Color: "808080"}}
	font := func(size float64, bold bool) *excelize.Font {
		return &excelize.Font{Family: "Arial", Size: size, Bold: bold, Color: "202020"}
	}
	number := func(format string) *excelize.Style {
		return &excelize.Style{Font: font(10, false), Border: line, CustomNumFmt: &format, Alignment: &excelize.Alignment{Horizontal: "right", Vertical: "center", Indent: 1}}
	}
	input := func(format string) *excelize.Style {
		s := number(format)
		s.Fill = excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{"FFF2CC"}}
		s.Border = []excelize.Border{{Type: "left", Style: 2, Color: "404040"}, {Type: "right", Style: 2, Color: "404040"},
			{Type: "top", Style: 1, Color: "404040"}, {Type: "bottom", Style: 1, Color: "404040"}}
		s.Protection = &excelize.Protection{Locked: false}
		return s
	}
	day := number(dayFormat)
	day.Alignment.Horizontal, day.Alignment.Indent, day.Alignment.WrapText = "left", 1, true
	key := number(dayFormat)
	key.Font, key.Alignment = font(10, true), day.Alignment
	looks := map[style]*excelize.Style{
		plainText: {Font: font(10, false), Border: line, Alignment: &excelize.Alignment{Vertical: "center", WrapText: true, Indent: 1, Horizontal: "left"}},
		title:     {Font: font(14, true)},
		head: {Font: font(9, true), Border: line, Fill: excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{"E2E6E2"}},
			Alignment: &excelize.Alignment{Horizontal: "center", Vertical: "center", WrapText: true}},
		small:      {Font: font(9, false)},
		wrapped:    {Font: font(9, false), Alignment: &excelize.Alignment{Vertical: "top", WrapText: true}},
		oneDecimal: number("0.0"), twoDecimals: number("0.00"), percent: number("0%"), whole: number("0"), date: day, strong: key,
		room:     {Font: font(10, false), Border: line, Alignment: &excelize.Alignment{Vertical: "center", WrapText: true, Indent: 1, Horizontal: "left"}, Protection: &excelize.Protection{Locked: false}},
		inNumber: input("0.0"), inTwo: input("0.0##"), inDate: input(dateFormat),
	}
	b.look = make(map[style]int, everything)
	for look := range everything { // in order: the same book has the same styles
		id, err := b.file.NewStyle(looks[look])
		if err != nil {
			return err
		}
		b.look[look] = id
	}
	return nil
}

// value is a cell that holds a value.
func (b *book) value(look style, value any) excelize.Cell {
	if number, ok := value.(float64); ok {
		value = tidy(number)
	}
	return excelize.Cell{StyleID: b.look[look], Value: value}
}

// live is a cell that holds a formula and the value it has.
func (b *book) live(look style, formula string, value any) excelize.Cell {
	cell := b.value(look, value)
	cell.Formula = formula
	return cell
}

// heads is a row of column heads.
func (b *book) heads(names ...string) []any {
	cells := make([]any, len(names))
	for i, name := range names {
		cells[i] = b.value(head, name)
	}
	return cells
}
