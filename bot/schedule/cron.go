package schedule

import (
	"context"
	"time"

	"github.com/robfig/cron/v3"
)

// EachMinute calls tick at the start of every minute until the context ends,
// and then waits for the call that runs. While one runs, the ticks it
// overlaps are left out: the next one finds what they would have done.
func EachMinute(ctx context.Context, now func() time.Time, tick func(context.Context, time.Time)) {
	clock := cron.New(cron.WithLocation(time.UTC), cron.WithChain(cron.SkipIfStillRunning(cron.DiscardLogger)))
	_, err := clock.AddFunc("* * * * *", func() { tick(ctx, now()) })
	if err != nil {
		panic("schedule: " + err.Error()) // the pattern is a constant
	}
	clock.Start()
	<-ctx.Done()
	<-clock.Stop().Done()
}
