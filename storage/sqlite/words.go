package sqlite

import "strings"

// The pieces of statements that are put together from a pattern.

func replaceColumn(pattern, name string) string { return strings.ReplaceAll(pattern, "COLUMN", name) }

func until(pattern, end string) string { return strings.ReplaceAll(pattern, "{until}", end) }

func replaced(pattern, from, this string) string {
	return strings.NewReplacer("{from}", from, "{this}", this).Replace(pattern)
}
