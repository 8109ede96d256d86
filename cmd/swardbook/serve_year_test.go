package main

import (
	"bufio"
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"swardbook/bot/command"
	"swardbook/bot/discord"
	"swardbook/bot/discord/fakechat"
	"swardbook/bot/schedule"
	"swardbook/planner"
	"swardbook/storage/sqlite"
)

// childOf names the database of a child process that only ticks.
const childOf = "SWARDBOOK_TEST_TICKS"

// The chat server of the tests, its channels and its lead.
const (
	server  = "100000000000000001"
	channel = "110000000000000001"
)

// tickingChild is the program reduced to its ticks: its clock is what comes
// down the pipe, a second a line, and each line is answered once the tick is
// over. It is there to be killed.
func tickingChild() {
	ctx := context.Background()
	die := func(err error) {
		if err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(3)
		}
	}
	path := os.Getenv(childOf)
	lock, err := sqlite.LockServing(ctx, path)
	die(err)
	defer lock.Close()
	db, err := sqlite.Open(ctx, path)
	die(err)
	var now atomic.Int64
	clock := func() time.Time { return time.Unix(now.Load(), 0) }
	log := slog.New(slog.NewTextHandler(os.Stderr, &slog.HandlerOptions{Level: slog.LevelError, ReplaceAttr: discord.Redactor(fakechat.Token)}))
	teams := newTeams(db, log)
	bot, err := discord.New(discord.Config{Token: fakechat.Token, BaseURL: os.Getenv("SWARDBOOK_CHAT_URL"), House: teams,
		Table: command.Desk{}.Table(nil), Log: log, Now: clock, Timing: discord.DefaultTiming()})
	die(err)
	fmt.Println("up")
	lines := bufio.NewScanner(os.Stdin)
	for lines.Scan() {
		second, err := strconv.ParseInt(lines.Text(), 10, 64)
		die(err)
		now.Store(second)
		tick(ctx, teams, bot, nil, log, clock())
		fmt.Println("ok")
	}
}

// child is one running tickingChild.
type child struct {
	cmd    *exec.Cmd
	in     io.WriteCloser
	out    *bufio.Scanner
	errOut bytes.Buffer
	once   sync.Once
}

func startChild(t *testing.T, path, url string) *child {
	t.Helper()
	program, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	c := &child{cmd: exec.Command(program)}
	c.cmd.Env = append(os.Environ(), childOf+"="+path, "SWARDBOOK_CHAT_URL="+url)
	c.cmd.Stderr = &c.errOut
	if c.in, err = c.cmd.StdinPipe(); err != nil {
		t.Fatal(err)
	}
	out, err := c.cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	c.out = bufio.NewScanner(out)
	if err := c.cmd.Start(); err != nil {
		t.Fatal(err)
	}
	if !c.out.Scan() || c.out.Text() != "up" {
		t.Fatalf("the child did not start: %s", c.lastWords())
	}
	return c
}

// tick sends one time down the pipe and waits for the tick to end; false when
// the child died meanwhile.
func (c *child) tick(at time.Time) bool {
	if _, err := fmt.Fprintln(c.in, at.Unix()); err != nil {
		return false
	}
	return c.out.Scan()
}

func (c *child) kill() {
	c.once.Do(func() {
		_ = c.cmd.Process.Kill() // SIGKILL
	})
}

func (c *child) wait() { _ = c.cmd.Wait() } // it was killed

// lastWords ends the child and is what it complained of: that is whole, and
// nobody's else, only then.
func (c *child) lastWords() string {
	c.kill()
	c.wait()
	return c.errOut.String()
}

// year is what TestYearOfKills tries.
type year struct {
	first, last planner.Day
	kills       int
}

// howLong reads from the environment how much is tried.
func howLong() year {
	first := planner.DayOf(2024, time.January, 1)
	switch {
	case os.Getenv("SWARDBOOK_FULL") != "":
		return year{first, first + 365, 300}
	case os.Getenv("SWARDBOOK_SLOW") != "":
		return year{first, first + 365, 60}
	}
	// All three clock changes would take all year: the usual run takes the days
	// around New York's.
	first = planner.DayOf(2024, time.March, 8)
	return year{first, first + 4, 5}
}

// A year of mornings in three zones, two posts each of which one falls into the
// clock changes, and the process killed at random moments: every post and day
// has exactly one message, or one recorded miss with its reason.
func TestYearOfKills(t *testing.T) {
	long := howLong()
	path := filepath.Join(t.TempDir(), "course.db")
	fake := fakechat.Start()
	defer fake.Close()
	fake.AddGuild(server, channel)
	seed := uint64(time.Now().UnixNano())
	t.Logf("seed %d", seed)
	random := rand.New(rand.NewPCG(seed, 0))
	setUpYear(t, path, long.first)

	var now atomic.Int64
	fake.SetClock(func() time.Time { return time.Unix(now.Load(), 0) })
	times := tickTimes(t, long)
	runner := yearRunner{t: t, path: path, fake: fake, random: random, now: &now, left: long.kills,
		every: max(1, len(times)/(2*long.kills)), way: random.IntN(3)}
	runner.run(times)
	checkYear(t, path, fake, long, runner.left)
}

// setUpYear sets three sites up, each with two posts.
func setUpYear(t *testing.T, path string, first planner.Day) {
	t.Helper()
	ctx := context.Background()
	db, err := sqlite.Open(ctx, path)
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	team, err := db.Team(ctx, chatPlatform, server)
	if err != nil {
		t.Fatal(err)
	}
	stamp := planner.Stamp{At: time.Date(2023, 12, 31, 0, 0, 0, 0, time.UTC), By: "Robin"}
	for i, zone := range []string{"America/New_York", "Europe/Dublin", "Australia/Lord_Howe"} {
		kept, err := team.Save(ctx, stamp, planner.Site{Name: "site " + strconv.Itoa(i+1), Lat: 40, Lon: 1, Zone: zone, Units: planner.Celsius,
			Rules: planner.Always(planner.DayRule{Boundary: planner.StandardMidnight})})
		if err != nil {
			t.Fatal(err)
		}
		for _, minute := range []int{330, []int{150, 90, 135}[i]} {
			if _, err := team.Save(ctx, stamp, planner.Post{Site: kept.(planner.Site).ID, What: "morning", Minute: minute, Channel: channel,
				WindowMinutes: planner.DefaultWindowMinutes, From: first}); err != nil {
				t.Fatal(err)
			}
		}
	}
}

// tickTimes are the minutes at which something may be due, and some between.
func tickTimes(t *testing.T, long year) []time.Time {
	t.Helper()
	var times []time.Time
	end := time.Date(2024, 1, 1, 0, 0, 0, 0, time.UTC).AddDate(0, 0, int(long.last-planner.DayOf(2024, time.January, 1))+2)
	for at := time.Date(2024, 1, 1, 0, 0, 0, 0, time.UTC).AddDate(0, 0, int(long.first-planner.DayOf(2024, time.January, 1))-1); at.Before(end); at = at.Add(30 * time.Minute) {
		times = append(times, at)
	}
	return times
}

// yearRunner feeds times to a child, kills it, and starts another.
type yearRunner struct {
	t      *testing.T
	path   string
	fake   *fakechat.Fake
	random *rand.Rand
	now    *atomic.Int64
	left   int // kills to come
	every  int // ticks between two
	way    int // how the next kill comes
	kinds  [4]int
}

func (r *yearRunner) run(times []time.Time) {
	c := startChild(r.t, r.path, r.fake.URL())
	until := r.every
	for i := 0; i < len(times); i++ {
		at := times[i]
		r.now.Store(at.Unix())
		short := len(times)-i <= 2*r.left // each of those to come must have its tick
		if until--; r.left == 0 || until > 0 && !short {
			if !c.tick(at) {
				r.t.Fatalf("the child died by itself: %s", c.lastWords())
			}
			continue
		}
		if short {
			r.way = 0 // comes for sure
		}
		died := r.tickAndKill(c, at)
		if !died {
			continue // nothing was sent in this tick: the next is tried
		}
		r.left--
		if until = 1 + r.random.IntN(2*r.every); r.random.IntN(4) == 0 {
			until = 1 // again at once, while it settles what was open
		}
		r.way = r.random.IntN(3)
		c = startChild(r.t, r.path, r.fake.URL())
		switch r.random.IntN(4) {
		case 0: // back in the same minute
			i--
		case 1: // back too late for some windows
			i += max(0, min(r.random.IntN(24), len(times)-1-i-2*r.left))
		}
	}
	// A little longer, so that what is open is settled.
	last := times[len(times)-1]
	for minute := 1; minute <= 3; minute++ {
		at := last.Add(time.Duration(minute) * time.Minute)
		r.now.Store(at.Unix())
		if !c.tick(at) {
			r.t.Fatalf("the child died by itself: %s", c.lastWords())
		}
	}
	c.kill()
	c.wait()
	r.t.Logf("killed at random %d, before a message %d, after it %d, while looking %d times", r.kinds[0], r.kinds[1], r.kinds[2], r.kinds[3])
}

// tickAndKill kills the child in the tick, in one of four ways; false when the
// tick gave no occasion.
func (r *yearRunner) tickAndKill(c *child, at time.Time) bool {
	first := r.way
	way := first // a look-back may come sooner
	var struck atomic.Bool
	var timer *time.Timer
	gone := make(chan struct{})
	strike := sync.OnceFunc(func() {
		struck.Store(true)
		c.kill()
		close(gone)
	})
	switch first {
	case 0:
		timer = time.AfterFunc(time.Duration(r.random.IntN(20_000))*time.Microsecond, strike)
	case 1, 2:
		// Requests come side by side: what they decide by is theirs, behind one lock.
		var deciding sync.Mutex
		looks := rand.New(rand.NewPCG(r.random.Uint64(), 0))
		skip := r.random.IntN(2) // the first message of the tick, or the second
		r.fake.SetFault(func(method, path string) *fakechat.Fault {
			deciding.Lock()
			defer deciding.Unlock()
			switch {
			case method == "GET" && strings.HasSuffix(path, "/messages") && !struck.Load() && looks.IntN(2) == 0:
				way = 3
				strike()
				return &fakechat.Fault{CutBefore: true}
			case method != "POST" || struck.Load():
				return nil
			case skip > 0:
				skip--
				return nil
			case first == 1:
				strike()
				return &fakechat.Fault{CutBefore: true}
			}
			return &fakechat.Fault{CutAfter: true, After: strike}
		})
		defer r.fake.SetFault(nil)
	}
	alive := c.tick(at)
	switch {
	case timer == nil:
	case !timer.Stop():
		<-gone // it has struck, or is about to
	case alive:
		strike() // the tick was over before
	}
	if !struck.Load() {
		if !alive {
			r.t.Fatalf("the child died by itself: %s", c.lastWords())
		}
		return false
	}
	r.kinds[way]++
	c.wait()
	if !r.fake.WaitGone(patience) {
		r.t.Fatal("calls of a killed child do not end")
	}
	return true
}

// checkYear compares the ledger with the channel.
func checkYear(t *testing.T, path string, fake *fakechat.Fake, long year, left int) {
	t.Helper()
	ctx := context.Background()
	db, err := sqlite.Open(ctx, path)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { err = errors.Join(err, db.Close()) }()
	team, err := db.Team(ctx, chatPlatform, server)
	if err != nil {
		t.Fatal(err)
	}
	rows, err := team.Postings(ctx, long.first)
	if err != nil {
		t.Fatal(err)
	}
	messages := map[string]int{}
	for _, m := range fake.Messages(channel) {
		_, ids := m.Buttons()
		parts := strings.SplitN(ids[0], ":", 3)
		messages[parts[1]]++
	}
	ledger := map[string]planner.Posting{}
	for _, row := range rows {
		ledger[schedule.MarkerOf(row).Text] = row
	}
	sent, missed := 0, 0
	for post := planner.PostID(1); post <= 6; post++ {
		for day := long.first; day <= long.last; day++ {
			marker := schedule.MarkerOf(planner.Posting{Post: post, Day: day}).Text
			row, ok := ledger[marker]
			switch n := messages[marker]; {
			case !ok:
				t.Errorf("post %d on %s is not in the ledger, %d messages", post, day, n)
			case row.State == planner.Sent && n == 1 && row.Message != "":
				sent++
			case row.State == planner.GivenUp && n == 0 && row.Reason != "":
				missed++
			default:
				t.Errorf("post %d on %s: %s, reason %q, %d messages", post, day, row.State, row.Reason, n)
			}
			delete(messages, marker)
		}
	}
	for marker, n := range messages {
		if row := ledger[marker]; n != 1 || row.State != planner.Sent { // days at the ends of the range
			t.Errorf("%d messages %s, ledger %s", n, marker, row.State)
		}
	}
	if left > 0 {
		t.Errorf("%d kills were left over", left)
	}
	for _, problem := range fake.Problems() {
		t.Error(problem)
	}
	t.Logf("%d posts sent, %d misses with a reason", sent, missed)
}
