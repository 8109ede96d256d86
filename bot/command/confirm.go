package command

import (
	"crypto/sha256"
	"fmt"
	"strings"
	"time"

	"swardbook/planner"
)

const (
	// confirmMinutes is how long a code holds: long enough to be called away,
	// short enough that the figures shown still stand.
	confirmMinutes = 10
	// confirmLetters leaves out what is easily misread: I, L, O, 0, 1.
	confirmLetters = "ABCDEFGHJKMNPQRSTUVWXYZ23456789"
	confirmLength  = 4
)

// confirmCode is the code by which the caller confirms the line in the minute.
// It is computed from these alone, so that nothing has to be kept; it guards
// against a slip, not against an attacker.
func confirmCode(caller, line string, minute int64) string {
	sum := sha256.Sum256(fmt.Appendf(nil, "%q %q %d", caller, line, minute))
	code := make([]byte, confirmLength)
	for i := range code {
		code[i] = confirmLetters[int(sum[i])%len(confirmLetters)]
	}
	return string(code)
}

func minuteOf(at time.Time) int64 {
	second := at.Unix()
	if second < 0 {
		second -= 59 // round down before 1970 too
	}
	return second / 60
}

// checkCode refuses a code that was not given to the caller for the line in
// this minute or the ten before it.
func checkCode(code, caller, line string, now time.Time) error {
	for age := int64(0); age <= confirmMinutes; age++ {
		if strings.EqualFold(code, confirmCode(caller, line, minuteOf(now)-age)) {
			return nil
		}
	}
	return planner.Problemf(planner.Refused, "the code %s does not confirm this", shorten(code)).
		WithHint("A code holds %d minutes, for one person and one command. Ask again: %s", confirmMinutes, line)
}
