package sqlite_test

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"swardbook/planner"
	"swardbook/storage/sqlite"
	"swardbook/storage/storetest"
)

var morningStamp = planner.Stamp{At: time.Date(2024, 6, 4, 5, 0, 0, 0, time.UTC), By: "Robin", Command: "/setup"}

func saved[N planner.Noun](t *testing.T, team *sqlite.Team, noun N) N {
	t.Helper()
	kept, err := team.Save(context.Background(), morningStamp, noun)
	if err != nil {
		t.Fatalf("save %s: %v", noun.Kind(), err)
	}
	return kept.(N)
}

func savedSite(t *testing.T, team *sqlite.Team, name string) planner.Site {
	t.Helper()
	return saved(t, team, planner.Site{Name: name, Lat: 40, Lon: -75, Zone: "America/New_York", Units: planner.Celsius,
		Rules: planner.Always(planner.DayRule{Boundary: planner.StandardMidnight})})
}

func savedPost(t *testing.T, team *sqlite.Team, site planner.SiteID) planner.Post {
	t.Helper()
	return saved(t, team, planner.Post{Site: site, What: "morning", Minute: 330, Channel: "77", WindowMinutes: 240, From: 19000})
}

// Posts, people and channels come back as they were kept, and are refused where
// they cannot stand.
func TestChatNouns(t *testing.T) {
	t.Parallel()
	db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
	home, other := team(t, db, "home"), team(t, db, "other")
	site := savedSite(t, home, "Quillmere")
	post := saved(t, home, planner.Post{Site: site.ID, What: "morning", Minute: 330, On: planner.WeekdaysOf(time.Monday), Channel: "77",
		WindowMinutes: 60, From: 19000, Trouble: "gone"})
	people := saved(t, home, planner.People{Group: "88", Role: planner.LeadRole})
	channel := saved(t, home, planner.Channel{Outside: "77", Site: site.ID})
	setup, err := home.Setup(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff([]planner.Post{post}, setup.Posts) + cmp.Diff([]planner.People{people}, setup.People) + cmp.Diff([]planner.Channel{channel}, setup.Channels); diff != "" {
		t.Error(diff)
	}
	changes, err := home.Changes(context.Background(), "post", 1)
	if err != nil || len(changes) != 1 || !cmp.Equal(changes[0].After, planner.Noun(post)) {
		t.Errorf("change %+v, %v", changes, err)
	}
	for name, row := range map[string]struct {
		noun planner.Noun
		team *sqlite.Team
		kind planner.Kind
	}{
		"group twice":          {planner.People{Group: "88", Role: planner.CrewRole}, home, planner.Taken},
		"channel twice":        {planner.Channel{Outside: "77", Site: site.ID}, home, planner.Taken},
		"another team's site":  {planner.Post{Site: site.ID, What: "morning", Channel: "1", WindowMinutes: 60}, other, planner.NotFound},
		"another team's post":  {post, other, planner.NotFound},
		"no time of the day":   {planner.Post{Site: site.ID, What: "morning", Minute: 1440, Channel: "1", WindowMinutes: 60}, home, planner.Invalid},
		"window of a day":      {planner.Post{Site: site.ID, What: "morning", Channel: "1", WindowMinutes: 1440}, home, planner.Invalid},
		"no window":            {planner.Post{Site: site.ID, What: "morning", Channel: "1"}, home, planner.Invalid},
		"a space in a channel": {planner.Channel{Outside: "7 7", Site: site.ID}, home, planner.Invalid},
		"no role":              {planner.People{Group: "9", Role: "boss"}, home, planner.Invalid},
	} {
		if _, err := row.team.Save(context.Background(), morningStamp, row.noun); planner.KindOf(err) != row.kind {
			t.Errorf("%s: %v, want %s", name, err, row.kind)
		}
	}
}

// One of many claims at the same time wins; a settled row stays as it is.
func TestLedger(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
	home, other := team(t, db, "home"), team(t, db, "other")
	post := savedPost(t, home, savedSite(t, home, "Quillmere").ID)
	at := time.Date(2024, 6, 4, 9, 30, 0, 0, time.UTC)
	row := planner.Posting{Post: post.ID, Day: 19878, State: planner.Claimed, Channel: "77", At: at, Partial: true}
	var won sync.Map
	var all sync.WaitGroup
	for i := range 8 {
		all.Go(func() {
			if ok, err := home.Claim(ctx, row); err != nil {
				t.Error(err)
			} else if ok {
				won.Store(i, true)
			}
		})
	}
	all.Wait()
	winners := 0
	won.Range(func(any, any) bool { winners++; return true })
	if winners != 1 {
		t.Errorf("%d claims won", winners)
	}
	if _, err := other.Claim(ctx, row); planner.KindOf(err) != planner.NotFound {
		t.Errorf("another team's claim: %v", err)
	}
	sent := row
	sent.State, sent.Message, sent.Channel, sent.At = planner.Sent, "555", "78", at.Add(time.Second)
	if err := other.Settle(ctx, sent); planner.KindOf(err) != planner.NotFound {
		t.Errorf("another team settles: %v", err)
	}
	if err := home.Settle(ctx, sent); err != nil {
		t.Fatal(err)
	}
	if err := home.Settle(ctx, row); planner.KindOf(err) != planner.NotFound {
		t.Errorf("settled twice: %v", err)
	}
	older := planner.Posting{Post: post.ID, Day: 19800, State: planner.Claimed, At: at}
	oldest := planner.Posting{Post: post.ID, Day: 19700, State: planner.GivenUp, At: at, Reason: "not running", Unsure: true}
	for _, one := range []planner.Posting{older, oldest} {
		if ok, err := home.Claim(ctx, one); err != nil || !ok {
			t.Fatalf("%v, %v", ok, err)
		}
	}
	for from, want := range map[planner.Day][]planner.Posting{
		19879: {older, sent}, // the claimed one and the newest
		19700: {oldest, older, sent},
	} {
		got, err := home.Postings(ctx, from)
		if diff := cmp.Diff(want, got); err != nil || diff != "" {
			t.Errorf("from %d: %v\n%s", from, err, diff)
		}
	}
	if got, err := other.Postings(ctx, 0); err != nil || len(got) > 0 {
		t.Errorf("another team reads %v, %v", got, err)
	}
}

func TestLines(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
	home, other := team(t, db, "home"), team(t, db, "other")
	first, err := home.KeepLine(ctx, "/due", morningStamp.At)
	if err != nil {
		t.Fatal(err)
	}
	again, err := home.KeepLine(ctx, "/due", morningStamp.At.Add(time.Hour))
	second, err2 := home.KeepLine(ctx, "/done", morningStamp.At)
	if err != nil || err2 != nil || again != first || second == first {
		t.Errorf("numbers %d, %d, %d; %v %v", first, again, second, err, err2)
	}
	if line, err := home.Line(ctx, second); err != nil || line != "/done" {
		t.Errorf("%q, %v", line, err)
	}
	if _, err := other.Line(ctx, first); planner.KindOf(err) != planner.NotFound {
		t.Errorf("another team reads a line: %v", err)
	}
}

func TestTeamsLeaveAndAreErased(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
	home, other := team(t, db, "home"), team(t, db, "other")
	for _, one := range []*sqlite.Team{home, other} {
		site := savedSite(t, one, "Quillmere")
		savedPost(t, one, site.ID)
		saved(t, one, planner.People{Group: "8", Role: planner.CrewRole})
	}
	left := time.Date(2024, 6, 1, 0, 0, 0, 0, time.UTC)
	for _, err := range []error{db.Left(ctx, "terminal", "Home", left), db.Left(ctx, "terminal", "home", left.Add(time.Hour)), db.Left(ctx, "terminal", "nobody", left)} {
		if err != nil {
			t.Fatal(err)
		}
	}
	if teams, err := db.Teams(ctx, "terminal"); err != nil || !cmp.Equal(teams, []string{"other"}) {
		t.Errorf("%v, %v", teams, err)
	}
	if n, err := db.EraseLeft(ctx, left); err != nil || n != 0 {
		t.Errorf("erased %d before its time, %v", n, err)
	}
	if err := db.Back(ctx, "terminal", "home"); err != nil {
		t.Fatal(err)
	}
	if n, err := db.EraseLeft(ctx, left.AddDate(1, 0, 0)); err != nil || n != 0 {
		t.Errorf("erased %d that came back, %v", n, err)
	}
	if err := db.Left(ctx, "terminal", "home", left); err != nil {
		t.Fatal(err)
	}
	if n, err := db.EraseLeft(ctx, left.Add(time.Second)); err != nil || n != 1 {
		t.Errorf("erased %d, %v", n, err)
	}
	again := team(t, db, "home")
	if setup, err := again.Setup(ctx); err != nil || len(setup.Sites) > 0 || again.ID() == home.ID() {
		t.Errorf("left over: %+v, %v", setup, err)
	}
	if setup, err := other.Setup(ctx); err != nil || len(setup.Sites) != 1 || len(setup.Posts) != 1 {
		t.Errorf("another team's: %+v, %v", setup, err)
	}
}

// A site goes with all that hangs on it and what was said of it, and nothing
// else does.
func TestEraseSite(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
	home, other := team(t, db, "home"), team(t, db, "other")
	site, stays := savedSite(t, home, "Secretvale"), savedSite(t, home, "Quillmere")
	theirs := savedSite(t, other, "Secretvale")
	station := saved(t, home, planner.Station{Site: site.ID, Name: "roof", Rank: 1})
	if _, err := (store{home}).Import(ctx, morningStamp, station.ID, fileOfDays(3)); err != nil {
		t.Fatal(err)
	}
	post := savedPost(t, home, site.ID)
	savedPost(t, home, stays.ID)
	if _, err := home.Claim(ctx, planner.Posting{Post: post.ID, Day: 1, State: planner.GivenUp, Reason: "x", At: morningStamp.At}); err != nil {
		t.Fatal(err)
	}
	if err := home.SaveAhead(ctx, morningStamp, site.ID, 19878, []planner.HandDay{{Day: 19879, HighC: 20, LowC: 10}}); err != nil {
		t.Fatal(err)
	}
	files, err := home.Export(ctx, site.ID)
	if err != nil {
		t.Fatal(err)
	}
	exported := map[string]string{}
	for _, file := range files {
		exported[file.Name] = string(file.Content)
	}
	for name, want := range map[string]string{"site.csv": "Secretvale", "daily.csv": "2024-06-0", "posting.csv": "given-up", "change.csv": "Secretvale", "hand_ahead.csv": "2024-06-05"} {
		if !strings.Contains(exported[name], want) {
			t.Errorf("%s: no %q in\n%s", name, want, exported[name])
		}
	}
	if strings.Contains(exported["change.csv"], "Quillmere") {
		t.Error("another site's change is exported")
	}
	if _, err := other.Export(ctx, site.ID+5); planner.KindOf(err) != planner.NotFound {
		t.Errorf("no such site: %v", err)
	}
	const secret = "/done greens note:\"the secret of Secretvale\""
	line, err := home.KeepLine(ctx, secret, morningStamp.At)
	if err != nil {
		t.Fatal(err)
	}
	theirLine, err := other.KeepLine(ctx, secret, morningStamp.At)
	if err != nil {
		t.Fatal(err)
	}
	if err := home.EraseSite(ctx, site.ID); err != nil {
		t.Fatal(err)
	}
	if text, err := home.Line(ctx, line); planner.KindOf(err) != planner.NotFound {
		t.Errorf("a kept line is read after the erasing: %q, %v", text, err)
	}
	if text, err := other.Line(ctx, theirLine); text != secret {
		t.Errorf("another team's line: %q, %v", text, err)
	}
	if again, err := home.KeepLine(ctx, secret, morningStamp.At); err != nil || again == line {
		t.Errorf("a line's number %d is given twice, %v", again, err)
	}
	if err := home.EraseSite(ctx, site.ID); planner.KindOf(err) != planner.NotFound {
		t.Errorf("twice: %v", err)
	}
	setup, err := home.Setup(ctx)
	if err != nil || len(setup.Sites) != 1 || len(setup.Posts) != 1 || len(setup.Stations) != 0 {
		t.Errorf("%+v, %v", setup, err)
	}
	changes, err := home.Changes(ctx, "", 100)
	if err != nil || len(changes) != 2 { // the other site and its post
		t.Errorf("%d changes, %v", len(changes), err)
	}
	if setup, err := other.Setup(ctx); err != nil || !cmp.Equal(setup.Sites, []planner.Site{theirs}) {
		t.Errorf("another team's: %+v, %v", setup, err)
	}
}

func TestServingLock(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	path := filepath.Join(t.TempDir(), "store.db")
	first, err := sqlite.LockServing(ctx, path)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := sqlite.LockServing(ctx, path); planner.KindOf(err) != planner.Refused {
		t.Errorf("a second one: %v", err)
	}
	openFile(t, path) // the file itself is free
	if err := first.Close(); err != nil {
		t.Fatal(err)
	}
	again, err := sqlite.LockServing(ctx, path)
	if err != nil {
		t.Fatalf("after the first: %v", err)
	}
	if err := again.Close(); err != nil {
		t.Error(err)
	}
	if _, err := os.Stat(path + ".serving"); err != nil {
		t.Error(err)
	}
	if _, err := sqlite.LockServing(ctx, filepath.Join(t.TempDir(), "no", "such", "store.db")); planner.KindOf(err) != planner.NotFound {
		t.Errorf("no folder: %v", err)
	}
}

func TestNotes(t *testing.T) {
	t.Parallel()
	ctx := context.Background()
	db := openFile(t, filepath.Join(t.TempDir(), "store.db"))
	if note, err := db.Note(ctx, "a"); err != nil || note != "" {
		t.Errorf("%q, %v", note, err)
	}
	for _, word := range []string{"one", "two"} {
		if err := db.SetNote(ctx, "a", word); err != nil {
			t.Fatal(err)
		}
	}
	if note, err := db.Note(ctx, "a"); err != nil || note != "two" {
		t.Errorf("%q, %v", note, err)
	}
}

// fileOfDays is a station file of so many days from 1 June 2024 on.
func fileOfDays(n int) storetest.File {
	var file storetest.File
	for i := range n {
		file.Daily = append(file.Daily, planner.DailyReading{Day: planner.DayOf(2024, time.June, 1+i), HighC: 20, LowC: 10})
	}
	return file
}
