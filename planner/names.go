package planner

import (
	"regexp"
	"strings"
)

var namePattern = regexp.MustCompile(`^[\p{L}\p{N}](?:[\p{L}\p{N} -]{0,30}[\p{L}\p{N}])?$`)

// CheckName refuses a name that is not 1 to 32 letters, digits, spaces and
// hyphens, beginning and ending with a letter or digit.
func CheckName(name string) error {
	if !namePattern.MatchString(name) || strings.Contains(name, "  ") {
		return Problemf(Invalid, "the name %q cannot be used", name).
			WithHint("A name is 1 to 32 letters, digits, single spaces and hyphens.")
	}
	return nil
}

// NameKey is the form in which names are compared and stand in figure keys:
// lower case, spaces as hyphens.
func NameKey(name string) string {
	return strings.ReplaceAll(strings.ToLower(strings.TrimSpace(name)), " ", "-")
}
