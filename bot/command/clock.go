package command

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"
)

var (
	clockBehind = regexp.MustCompile(`^(.*?)(?: at)?[ t](\d[\d:.]*(?: ?[ap]\.?m\.?)?)$`)
	// clockWords: hours and minutes with a colon, a dot or nothing between, or
	// hours alone; am or pm behind.
	clockWords = regexp.MustCompile(`^(\d{1,2})(?:([:.]?)([0-5]\d))?(?: ?([ap])\.?m\.?)?$`)
)

// readClock reads a time of the day as people write it: 06:10, 6:10, 06.10,
// 6.10, 0610, 5am, 5:00pm, 6.10 pm. It gives it as 06:10.
func readClock(text string) (clock string, ok bool) {
	match := clockWords.FindStringSubmatch(squeezed(text))
	if match == nil {
		return "", false
	}
	hours, between, minutes, half := match[1], match[2], match[3], match[4]
	hour, _ := strconv.Atoi(hours)
	switch {
	case half == "" && (minutes == "" || between == "" && len(hours) < 2), half == "" && hour > 23, half != "" && (hour < 1 || hour > 12):
		return "", false
	case half != "":
		hour %= 12 // 12 am is midnight, 12 pm is noon
		if half == "p" {
			hour += 12
		}
	}
	if minutes == "" {
		minutes = "00"
	}
	return fmt.Sprintf("%02d:%s", hour, minutes), true
}

// clockParts are the hour and the minute of a time like 06:10.
func clockParts(clock string) (hour, minute int) {
	hours, minutes, _ := strings.Cut(clock, ":")
	hour, _ = strconv.Atoi(hours)
	minute, _ = strconv.Atoi(minutes)
	return hour, minute
}

// firstYearNotClock is the first of the years behind "1 jul" that are taken
// for a year though a clock can show them: nobody logs what was done in 1830,
// which is half past six in the evening.
const firstYearNotClock = "2000"

// rateLike is more likely the rate that stands behind a day: 2.50 is not taken
// for ten to three.
var rateLike = regexp.MustCompile(`^\d\.\d\d$`)

// cutClock takes a time like 06:10 off the end of a day as typed. A time alone
// is today's.
func cutClock(text string) (day, clock string) {
	match := clockBehind.FindStringSubmatch(" " + squeezed(text))
	if match == nil {
		return text, ""
	}
	clock, ok := readClock(match[2])
	if _, whole := readDay(text); !ok || rateLike.MatchString(match[2]) || whole && match[2] >= firstYearNotClock {
		return text, ""
	}
	if day = strings.TrimSuffix(squeezed(match[1]), ","); day == "" {
		day = "today"
	}
	return day, clock
}
