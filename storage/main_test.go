package storage_test

import (
	"flag"
	"os"
	"testing"
)

func TestMain(m *testing.M) {
	flag.Parse()
	if raceOn { // what races shows in a few rounds
		if err := flag.Set("rapid.checks", "3"); err != nil {
			panic(err)
		}
	}
	os.Exit(m.Run())
}
