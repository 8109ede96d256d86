package workbook

import "fmt"

const issuedHead = 1 // row of the heads of the sheet as issued

// issuedInput is an input and its value as issued.
type issuedInput struct {
	name  string
	value float64
}

// issued writes the inputs as issued, each beside whether it was changed: what
// stood on issued curves asks the bot once an input behind them is another one.
func (b *book) issued(p *page) error {
	if err := p.SetColWidth(1, 3, 20); err != nil {
		return err
	}
	if _, err := p.add(b.heads("input", "as issued", "changed")...); err != nil {
		return err
	}
	for _, input := range b.at.issued {
		row := p.row + 1
		if _, err := p.add(b.value(plainText, input.name), b.value(twoDecimals, input.value),
			b.live(plainText, fmt.Sprintf("%s<>B%d", input.name, row), false)); err != nil {
			return err
		}
	}
	return nil
}

// changed is a formula that is true once one of the inputs is not as issued;
// names that are no inputs are passed over.
func (b *book) changed(names ...string) string {
	text := ""
	for _, name := range names {
		if flag, ok := b.at.flags[name]; ok {
			text += "," + flag
		}
	}
	if text == "" {
		return "FALSE"
	}
	return "OR(" + text[1:] + ")"
}
