package command

import (
	"regexp"
	"strconv"
	"strings"

	"swardbook/planner"
)

// read reads the text of one value, or says what is wrong with it.
func (o *Option) read(text string) (value, error) {
	text = clean(text)
	if o.Kind != Text && o.Kind != File {
		text = strings.Join(strings.Fields(text), " ")
	}
	if text == "" && o.Kind != Text {
		return value{}, noValue(o.Name, o)
	}
	out := value{option: o, text: text}
	if !out.fill() {
		return value{}, o.unread(text)
	}
	if number, beyond := out.beyond(o.Range); beyond {
		return value{}, planner.Problemf(planner.Invalid, "%s cannot be %s", o.Name, plain(number)).
			WithHint("%s", o.hint())
	}
	return out, nil
}

// beyond finds a number outside the range.
func (v *value) beyond(bounds *Range) (float64, bool) {
	if bounds == nil {
		return 0, false
	}
	numbers := v.numbers
	if v.option.Kind != Numbers {
		numbers = []float64{v.number}
	}
	for _, number := range numbers {
		if number < bounds.Min || number > bounds.Max {
			return number, true
		}
	}
	return 0, false
}

// fill reads the text by its option's kind, and puts it in its canonical form.
func (v *value) fill() (ok bool) {
	switch v.option.Kind {
	case Text, File:
		return true
	case Name:
		return planner.CheckName(v.text) == nil
	case Names:
		return v.fillNames()
	case Number:
		v.number, v.text, ok = readNumber(v.text)
	case Whole:
		v.number, v.text, ok = readNumber(v.text)
		return ok && wholePattern.MatchString(v.text)
	case Numbers:
		return v.fillNumbers()
	case Day:
		day := v.text
		if v.option.Clock {
			day, v.clock = cutClock(v.text)
		}
		v.day, ok = readDay(day)
		v.text = strings.ToLower(v.text)
	case MonthDay:
		v.month, ok = readMonthDay(v.text)
		v.text = v.month.String()
	case Choice:
		return v.fillChoice()
	case Temperature, Warming, Target:
		return v.fillDegrees()
	case Yes:
		return v.fillYes()
	case ChatChannel, ChatGroup:
		return outsidePattern.MatchString(v.text)
	}
	return ok
}

func (v *value) fillNames() bool {
	names := splitNames(v.text)
	seen := make(map[string]bool, len(names))
	for _, name := range names {
		key := planner.NameKey(name)
		if planner.CheckName(name) != nil || seen[key] {
			return false
		}
		seen[key] = true
	}
	v.text = strings.Join(names, ",")
	return true
}

func (v *value) fillNumbers() bool {
	if _, either := decimalOrList(v.text); either {
		return false
	}
	fields := strings.FieldsFunc(v.text, func(r rune) bool { return r == ',' || r == ' ' })
	texts := make([]string, len(fields))
	for i, field := range fields {
		number, text, ok := readNumber(field)
		if !ok {
			return false
		}
		v.numbers, texts[i] = append(v.numbers, number), text
	}
	v.text = strings.Join(texts, ",")
	if _, either := decimalOrList(v.text); either {
		v.text = strings.Join(texts, ", ")
	}
	return len(texts) > 0
}

func (v *value) fillChoice() bool {
	for _, choice := range v.option.Choices {
		if strings.EqualFold(choice, v.text) {
			v.text = choice
			return true
		}
	}
	return false
}

func (v *value) fillDegrees() bool {
	text := strings.ToLower(v.text)
	if n := len(text) - 1; text[n] == 'c' || text[n] == 'f' {
		v.unit = unitOf(text[n:])
		text = strings.TrimSpace(strings.TrimSuffix(strings.TrimSpace(text[:n]), "°"))
	}
	text = strings.TrimSpace(strings.TrimSuffix(text, "°"))
	number, text, ok := readNumber(text)
	v.number, v.text = number, text+string(v.unit)
	return ok
}

// unitOf reads a temperature unit after a number; empty is none.
func unitOf(text string) planner.Units {
	switch strings.TrimPrefix(strings.ToLower(text), "°") {
	case "c":
		return planner.Celsius
	case "f":
		return planner.Fahrenheit
	}
	return ""
}

func (v *value) fillYes() bool {
	switch strings.ToLower(v.text) {
	case "yes", "y", "true":
		v.yes, v.text = true, "yes"
	case "no", "n", "false":
		v.text = "no"
	default:
		return false
	}
	return true
}

var (
	// numberPattern keeps out what strconv reads beyond plain numbers
	// (infinities, hexadecimal, exponents), and more digits than are kept.
	numberPattern = regexp.MustCompile(`^-?(?:\d{1,12}(?:\.\d{0,12})?|\.\d{1,12})$`)
	wholePattern  = regexp.MustCompile(`^-?\d{1,9}$`)
)

// outsidePattern is an id that a chat server gives.
var outsidePattern = regexp.MustCompile(`^[A-Za-z0-9_-]{1,64}$`)

// readNumber reads a plain number, and gives its text without a plus sign or
// the long minus sign that some keyboards type.
func readNumber(text string) (number float64, canonical string, ok bool) {
	canonical = strings.TrimPrefix(strings.Replace(text, "−", "-", 1), "+")
	if !numberPattern.MatchString(canonical) {
		return 0, text, false
	}
	number, err := strconv.ParseFloat(canonical, 64)
	return number, canonical, err == nil
}
