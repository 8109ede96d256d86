package intake

import (
	"bytes"
	"strconv"
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
	for _, c := range text {
		if (c < '0' || c > '9') && c != '+' && c != '-' && c != '.' && c != 'e' && c != 'E' {
			return 0, false
		}
	}
	value, err := strconv.ParseFloat(string(text), 64)
	return value, err == nil
}

// missingNumber knows the numbers by which station files say "no value" (common
// practice); none is a temperature on earth in either unit.
func missingNumber(value float64) bool {
	switch value {
	case 9999, -9999, 999.9, -999.9, 999, -999:
		return true
	}
	return false
}

// missingWord reports whether the text says "no value", in upper or lower case.
func missingWord(text []byte) bool {
	if len(text) > 4 {
		return false
	}
	switch string(bytes.ToLower(text)) {
	case "", "-", "na", "n/a", "nan", "null", "none", "m":
		return true
	}
	return false
}
