//go:build race

package storage_test

// raceOn says that the race detector, which makes everything ten times slower,
// is on: tests then take fewer rounds.
const raceOn = true
