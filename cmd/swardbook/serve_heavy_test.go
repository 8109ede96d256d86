package main

import (
	"math"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"testing"
	"time"

	"swardbook/bot/discord/fakechat"
)

// BenchmarkHundredInFlight gives a hundred commands at once and says after what
// time the first answers came: half of them, 99 of 100, and the last.
func BenchmarkHundredInFlight(b *testing.B) {
	s := serveFake(b, filepath.Join(b.TempDir(), "course.db"), fixed(tuesday), nil)
	s.setUpSite(server, channel, "Quillmere")
	var waits []time.Duration
	for b.Loop() {
		var all []*fakechat.Interaction
		for i := range 100 {
			path := []string{"due", "briefing", "whatif", "season"}[i%4]
			all = append(all, s.fake.Command(server, channel, worker, path))
		}
		for _, in := range all {
			if !s.fake.Wait(in, patience) {
				b.Fatal("no answer")
			}
			waits = append(waits, in.Answered)
		}
	}
	slices.Sort(waits)
	at := func(share float64) float64 { return waits[int(share*float64(len(waits)-1))].Seconds() * 1000 }
	b.ReportMetric(at(0.5), "ms-p50")
	b.ReportMetric(at(0.99), "ms-p99")
	b.ReportMetric(at(1), "ms-last")
	b.ReportMetric(0, "ns/op")
}

// The heap after 50,000 interactions is within a fifth of the heap after 5,000:
// nothing is kept for each of them.
func TestHeapStaysLevel(t *testing.T) {
	if os.Getenv("SWARDBOOK_SLOW") == "" {
		t.Skip("takes a minute or two: SWARDBOOK_SLOW=1 runs it")
	}
	s := serveFake(t, filepath.Join(t.TempDir(), "course.db"), time.Now, nil)
	const early, late, together = 5_000, 50_000, 50
	heapAfter := map[int]uint64{}
	for done := 0; done < late; done += together {
		var all []*fakechat.Interaction
		for i := range together {
			if i%5 == 0 {
				all = append(all, s.fake.Complete(server, channel, worker, "due", fakechat.Option{Name: "surface", Type: 3, Value: "g", Focused: true}))
				continue
			}
			all = append(all, s.fake.Command(server, channel, worker, "help", fakechat.Option{Name: "topic", Type: 3, Value: "due"}))
		}
		for _, in := range all {
			if !s.fake.Wait(in, patience) {
				t.Fatal("no answer")
			}
		}
		s.fake.Forget()
		if n := done + together; n == early || n == late {
			heapAfter[n] = leastHeap()
		}
	}
	t.Logf("heap after %d: %d KiB, after %d: %d KiB", early, heapAfter[early]>>10, late, heapAfter[late]>>10)
	if heapAfter[late] > heapAfter[early]*6/5 {
		t.Errorf("the heap grew from %d to %d bytes", heapAfter[early], heapAfter[late])
	}
}

// leastHeap is the smallest heap of some seconds: what was answered is put away
// meanwhile.
func leastHeap() uint64 {
	least := uint64(math.MaxUint64)
	for range 10 {
		time.Sleep(200 * time.Millisecond)
		runtime.GC()
		runtime.GC()
		var stats runtime.MemStats
		runtime.ReadMemStats(&stats)
		least = min(least, stats.HeapAlloc)
	}
	return least
}
