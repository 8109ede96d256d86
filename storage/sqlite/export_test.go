package sqlite

import "testing"

// Dump is every row of every table, for tests from outside.
func Dump(t testing.TB, db *DB) map[string][]string { return dump(t, db) }
