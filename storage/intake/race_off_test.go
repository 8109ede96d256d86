//go:build !race

package intake_test

const raceOn = false
