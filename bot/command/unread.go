package command

import (
	"regexp"
	"strings"

	"swardbook/planner"
)

// unread is the problem of a text that the option cannot take. Of what people
// often write it says how to write it here.
func (o *Option) unread(text string) error {
	var problem *planner.Problem
	switch o.Kind {
	case Day, MonthDay:
		problem = o.askOrder(text)
	case Numbers:
		problem = o.askDot(text)
	case Number, Whole, Temperature, Warming, Target:
		problem = withDot(o.Name, text)
	}
	if problem != nil {
		return problem
	}
	return planner.Problemf(planner.Invalid, "%s cannot be %q", o.Name, shorten(text)).WithHint("%s", o.hint())
}

// askOrder asks which day a date like 1/7 or 1.7 is; nil when there is none in
// the text, or none that is a day.
func (o *Option) askOrder(text string) *planner.Problem {
	date, readings := inNumbers(text)
	if len(readings) == 0 {
		return nil
	}
	lines := make([]string, len(readings))
	for i, reading := range readings {
		lines[i] = o.Name + ":" + quote(strings.Replace(squeezed(text), date, strings.ToLower(reading), 1))
	}
	return planner.Problemf(planner.Invalid, "%s: %s?", date, strings.Join(readings, " or ")).
		WithHint("Write %s.", strings.Join(lines, " or "))
}

var (
	// commaInside is a comma with a digit on both sides and no blank.
	commaInside = regexp.MustCompile(`(\d),(\d)`)
	// commaDecimal is a number with a decimal comma at the beginning of a text.
	commaDecimal = regexp.MustCompile(`^[-−+]?\d{1,12},(\d{1,12})(?:$|[^\d,.])`)
)

// oneOrTwo is a number with a decimal comma, or two numbers.
var oneOrTwo = regexp.MustCompile(`^[-−+]?\d+,\d$`)

// decimalOrList finds the number in a list that could have a decimal comma or
// be two numbers: the list has another separator too ("29,5 30,5", "29,5;
// 30,5"), or it is all of the list and has one digit behind the comma.
func decimalOrList(text string) (number string, either bool) {
	if oneOrTwo.MatchString(text) {
		return text, true
	}
	parts := strings.FieldsFunc(text, func(r rune) bool { return r == ' ' || r == ';' })
	if len(parts) < 2 {
		return "", false
	}
	for _, part := range parts {
		if part = strings.Trim(part, ","); commaInside.MatchString(part) {
			return part, true
		}
	}
	return "", false
}

// askDot asks whether commas are decimal ones; nil where they are not in doubt.
func (o *Option) askDot(text string) *planner.Problem {
	number, either := decimalOrList(text)
	if !either {
		return nil
	}
	list := func(inside string) string {
		out := commaInside.ReplaceAllString(strings.ReplaceAll(text, ";", " "), "${1}"+inside+"${2}")
		return quote(strings.Join(strings.FieldsFunc(out, func(r rune) bool { return r == ',' || r == ' ' }), " "))
	}
	return planner.Problemf(planner.Invalid, "%s: is %s one number or several?", o.Name, shorten(number)).
		WithHint("One: write %s with a dot, %s:%s. Several: %s:%s.", strings.ReplaceAll(number, ",", "."), o.Name, shorten(list(".")), o.Name, shorten(list(" ")))
}

// withDot is the problem of a number with a decimal comma, with a unit behind
// it or not; nil when the text begins with none.
func withDot(name, text string) *planner.Problem {
	match := commaDecimal.FindStringSubmatch(text)
	if match == nil {
		return nil
	}
	put := func(instead string) string {
		return name + ":" + quote(shorten(strings.Replace(text, ",", instead, 1)))
	}
	problem := planner.Problemf(planner.Invalid, "%s cannot be %q", name, shorten(text))
	const thousands = 3
	if len(match[1]) == thousands {
		return problem.WithHint("Write %s for thousands, or %s with a dot.", put(""), put("."))
	}
	return problem.WithHint("Write the number with a dot: %s", put("."))
}

// dotted refuses a number with a decimal comma at the beginning of a Text
// option.
func (v Values) dotted(name string) error {
	text, _ := v.Text(name)
	if problem := withDot(name, text); problem != nil {
		return problem
	}
	return nil
}
