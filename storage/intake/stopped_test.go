package intake_test

import (
	"errors"
	"strings"
	"testing"

	"swardbook/storage/intake"
)

// Whoever asked for the file may stop it at any time: while it is gone through
// and while it is read.
func TestStopped(t *testing.T) {
	t.Parallel()
	content := "time,temp_c\n" + strings.Repeat("01/07/2013 05:00,17.8\n13/07/2013 05:00,17.8\n", 200_000)
	enough := errors.New("enough")
	for _, reads := range []int{0, 1, 5, 40, 150, 250} {
		left := reads
		how := intake.How{Stopped: func() error {
			if left--; left < 0 {
				return enough
			}
			return nil
		}}
		got := readHow(strings.NewReader(content), site, how)
		if !errors.Is(got.err, enough) {
			t.Errorf("stopped after %d reads: %d rows, %v", reads, got.taken, got.err)
		}
	}
}
