package intake

import (
	"bytes"
	"strconv"

	"swardbook/planner"
)

// tens holds the powers of ten that a float64 holds exactly as far as needed.
var tens = [16]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15}

// parseNumber reads a decimal number as strconv.ParseFloat does, and nothing
// else: no hexadecimal, no underscore, no infinity, no NaN. Up to 15 digits are
// an integer and a power of ten that both are exact, so that one division
// rounds correctly; more, and exponents, are left to strconv.
func parseNumber(text []byte) (value float64, ok bool) {
	rest, negative := text, false
	if len(rest) > 0 && (rest[0] == '-' || rest[0] == '+') {
		negative, rest = rest[0] == '-', rest[1:]
	}
	var digits uint64
	count, point := 0, -1
	for i, c := range rest {
		switch {
		case c >= '0' && c <= '9' && count < 15:
			digits = digits*10 + uint64(c-'0')
			count++
		case c == '.' && point < 0:
			point = i
		default:
			return parseLongNumber(text)
		}
	}
	if count == 0 {
		return 0, false
	}
	value = float64(digits)
	if point >= 0 {
		value /= tens[len(rest)-1-point]
	}
	if negative {
		value = -value
	}
	return value, true
}

// longestNumber is the longest text taken for a number, in bytes: a float64
// has 17 digits that matter, a sign, a point and an exponent.
const longestNumber = 64

func parseLongNumber(text []byte) (value float64, ok bool) {
	if len(text) > longestNumber {
		return 0, false
	}
	for i, c := range text {
		if c == ',' && bytes.IndexByte(text, '.') < 0 && bytes.Count(text, []byte{','}) == 1 {
			plain := bytes.Clone(text)
			plain[i] = '.'
			return parseNumber(plain)
		}
		if (c < '0' || c > '9') && c != '+' && c != '-' && c != '.' && c != 'e' && c != 'E' {
			return 0, false
		}
	}
	value, err := strconv.ParseFloat(string(text), 64)
	return value, err == nil
}

// parseMeasured reads a number with its unit behind it or none: 17.8, 17,8,
// −2.1, 64.0 °F. units is "" without one.
func parseMeasured(text []byte) (value float64, units planner.Units, ok bool) {
	if value, ok = parseNumber(text); ok || len(text) == 0 || len(text) > longestNumber {
		return value, "", ok
	}
	last := text[len(text)-1] | 0x20
	if last == 'c' || last == 'f' {
		units = planner.Celsius
		if last == 'f' {
			units = planner.Fahrenheit
		}
		text = bytes.TrimSpace(text[:len(text)-1])
		for _, sign := range []string{"°", "º", "\xb0", "deg"} {
			text = bytes.TrimSuffix(text, []byte(sign))
		}
		text = bytes.TrimSpace(text)
	}
	for _, minus := range []string{"\u2212", "\u2013", "\x96"} {
		if rest, found := bytes.CutPrefix(text, []byte(minus)); found {
			value, ok = parseNumber(rest)
			return -value, units, ok && rest[0] != '-' && rest[0] != '+'
		}
	}
	value, ok = parseNumber(text)
	return value, units, ok
}

// missingNumber knows the numbers by which station files say "no value" (common
// practice); none is a temperature on earth in either unit.
func missingNumber(value float64) bool {
	switch value {
	case 9999, -9999, 999.9, -999.9, 999, -999, 9999.9, -9999.9, 999.99, -999.99, -99.99, -99.9, 32767, -32768, -7999, 6999:
		return true
	}
	return false
}

// missingWord reports whether the text says "no value", in upper or lower case.
func missingWord(text []byte) bool {
	if len(bytes.Trim(text, "-/*.?#")) == 0 {
		return true // "---", "////", "***"
	}
	if len(text) > 7 {
		return false
	}
	switch string(bytes.ToLower(text)) {
	case "na", "n/a", "#n/a", "n.a.", "nan", "null", "none", "m", "nd", "n.d.", "err", "error", "fault", "missing", "ninan", "-nan", "\u2014", "\u2013":
		return true
	}
	return false
}
