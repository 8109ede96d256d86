//go:build !race

package storage_test

const raceOn = false
