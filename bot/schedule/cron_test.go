package schedule_test

import (
	"context"
	"testing"
	"testing/synctest"
	"time"

	"swardbook/bot/schedule"
)

// The tick comes at every full minute, a long one is not overlapped, and the
// end waits for the one that runs.
func TestEachMinute(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		ctx, cancel := context.WithCancel(context.Background())
		var ticks []time.Time
		running, most := 0, 0
		finished := false
		done := make(chan struct{})
		go func() {
			defer close(done)
			schedule.EachMinute(ctx, time.Now, func(_ context.Context, now time.Time) {
				running++
				most = max(most, running)
				ticks = append(ticks, now)
				if len(ticks) == 3 {
					time.Sleep(150 * time.Second)
				}
				if ctx.Err() != nil {
					finished = true
				}
				if len(ticks) == 5 {
					time.Sleep(10 * time.Second)
					finished = ctx.Err() != nil
				}
				running--
			})
		}()
		time.Sleep(7*time.Minute + time.Second) // ticks 1, 2, 3 (long), then at 6 and 7
		cancel()
		<-done
		if len(ticks) != 5 || most != 1 || !finished {
			t.Errorf("%d ticks, %d at a time, the last finished: %v", len(ticks), most, finished)
		}
		for _, at := range ticks {
			if at.Second() != 0 {
				t.Errorf("a tick at %s", at.Format(time.TimeOnly))
			}
		}
	})
}
