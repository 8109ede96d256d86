package intake_test

import (
	"errors"
	"fmt"
	"io"
	"runtime"
	"strings"
	"testing"
	"testing/iotest"

	"swardbook/planner"
	"swardbook/storage/intake"
)

const mebibyte = 1 << 20

// endless repeats a text for ever and counts what was asked of it.
type endless struct {
	text string
	sent int
}

func (e *endless) Read(p []byte) (int, error) {
	for i := range p {
		p[i] = e.text[(e.sent+i)%len(e.text)]
	}
	e.sent += len(p)
	return len(p), nil
}

func TestOpenStopsAtAnEndlessLine(t *testing.T) {
	t.Parallel()
	for name, text := range map[string]string{
		"header":      "time,temp_c,",
		"no header":   "x",
		"commas":      ",",
		"open quote":  `time,"`,
		"quotes":      `"`,
		"blank lines": "\n", // not a long line: read on for ever, so it is bounded here
		"spaces":      " ",
		"row":         "1",
	} {
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			source := &endless{text: text}
			var content io.Reader = source
			switch name {
			case "blank lines":
				content = io.LimitReader(source, 4*mebibyte)
			case "header newline":
				source.text = "1"
				content = io.MultiReader(strings.NewReader("time,temp_c\n"), source)
			}
			got := read(content, site, "")
			var problem *planner.Problem
			if !errors.As(got.err, &problem) || problem.Kind != planner.Refused || problem.Hint == "" {
				t.Fatalf("error %v, want a refused problem with a hint", got.err)
			}
			if source.sent > 4*mebibyte {
				t.Errorf("%d bytes were read before giving up", source.sent)
			}
		})
	}
}

func TestALongLineAmongTheRows(t *testing.T) {
	t.Parallel()
	head, tail := "time,temp_c,note\n2013-07-01T05:00Z,17.8,\n2013-07-01T06:00Z,18.9,", "\n2013-07-01T07:00Z,19.4,\n"
	const before = len("2013-07-01T06:00Z,18.9,")
	fits := read(strings.NewReader(head+strings.Repeat("x", mebibyte-before)+tail), site, "")
	if fits.err != nil || fits.taken != 3 {
		t.Errorf("a line of 1 MiB: %d rows, error %v; want 3 and none", fits.taken, fits.err)
	}
	over := read(strings.NewReader(head+strings.Repeat("x", mebibyte-before+1)+tail), site, "")
	wantProblem(t, over.err, "line 3 is longer than 1 MiB")
	if over.taken != 0 {
		t.Errorf("%d rows before the long line, want none", over.taken)
	}
}

// An open quote is looked after for 100 lines and costs its own row alone.
func TestAnOpenQuoteCostsItsOwnRow(t *testing.T) {
	t.Parallel()
	for _, following := range []int{0, 1, 98, 99, 100, 5000} {
		var b strings.Builder
		b.WriteString("time,temp_c,note\n2013-07-01T05:00Z,17.8,\"open\n")
		for i := range following {
			fmt.Fprintf(&b, "2013-07-%02dT%02d:%02dZ,17.8,\n", 2+i/1440, i/60%24, i%60)
		}
		got := read(strings.NewReader(b.String()), site, "")
		if got.err != nil || got.taken != following || len(got.refusals) != 1 || got.refusals[0].Line != 2 {
			t.Errorf("%d rows after an open quote: %d taken, refused %v, error %v", following, got.taken, got.refusals, got.err)
		}
	}
}

func TestAQuotedValueOver100LinesIsRefused(t *testing.T) {
	t.Parallel()
	// Of 101 lines the first is broken, 99 are blank, and the last is a lone
	// quote, broken too.
	for _, row := range []struct{ lines, taken, refused int }{{100, 2, 0}, {101, 1, 2}} {
		content := "time,temp_c,note\n2013-07-01T05:00Z,17.8,\"" + strings.Repeat("\n", row.lines-1) + "\"\n2013-07-01T06:00Z,18,\n"
		got := read(strings.NewReader(content), site, "")
		if got.err != nil || got.taken != row.taken || len(got.refusals) != row.refused {
			t.Errorf("a value over %d lines: %d taken, %d refused, error %v; want %d and %d", row.lines, got.taken, len(got.refusals), got.err, row.taken, row.refused)
		}
	}
}

func TestManyColumns(t *testing.T) {
	t.Parallel()
	ok := read(strings.NewReader("time,temp_c"+strings.Repeat(",x", 998)+"\n"), site, "")
	if ok.err != nil {
		t.Errorf("1000 columns: %v", ok.err)
	}
	wantProblem(t, read(strings.NewReader("time,temp_c"+strings.Repeat(",x", 999)+"\n"), site, "").err, "1001 columns")
}

// A million rows must not cost more memory than a thousand.
func TestMemoryDoesNotGrowWithTheFile(t *testing.T) {
	row := "2013-07-01T05:00Z,17.8,\"a \"\"quoted\"\" remark\"\n"
	const long = 210_000 // rows, 10 MB: more than is kept in memory
	content := io.MultiReader(strings.NewReader("time,temp_c,note\n"), io.LimitReader(&endless{text: row}, int64(long*len(row))))
	file, err := intake.Open(content, site, intake.How{})
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows := func(n int) {
		for range n {
			if _, err := file.Next(); err != nil {
				t.Fatal(err)
			}
		}
	}
	rows(2000)
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	rows(200_000)
	runtime.ReadMemStats(&after)
	if grown := after.TotalAlloc - before.TotalAlloc; grown > mebibyte {
		t.Errorf("200,000 rows allocated %d bytes", grown)
	}
}

func TestReadErrorsAreNotRows(t *testing.T) {
	t.Parallel()
	broken := errors.New("the cable is out")
	content := io.MultiReader(strings.NewReader("time,temp_c\n2013-07-01T05:00Z,17.8\n2013-07-01T06:00Z,1"), iotest.ErrReader(broken))
	got := read(content, site, "")
	// A reader that breaks within the first block is noticed on opening.
	if !errors.Is(got.err, broken) || got.taken != 0 {
		t.Errorf("error %v after %d rows, want the reader's own", got.err, got.taken)
	}
	long := "time,temp_c\n" + strings.Repeat("2013-07-01T05:00Z,17.8\n", 1000)
	got = read(io.MultiReader(strings.NewReader(long+"2013-07-01T06:00Z,1"), iotest.ErrReader(broken)), site, "")
	if !errors.Is(got.err, broken) || got.taken != 0 {
		t.Errorf("error %v after %d rows, want the reader's own and no row", got.err, got.taken)
	}
	if !strings.Contains(fmt.Sprint(got.err), "line 1002") {
		t.Errorf("error %q does not name the line", got.err)
	}
	idle := read(idleReader{}, site, "")
	if !errors.Is(idle.err, io.ErrNoProgress) {
		t.Errorf("a reader that never reads: %v", idle.err)
	}
}

type idleReader struct{}

func (idleReader) Read([]byte) (int, error) { return 0, nil }

// Readers may return as little as they like.
func TestOneByteAtATime(t *testing.T) {
	t.Parallel()
	content := "\ufefftime,temp_c,note\r\n2013-07-01T05:00Z,17.8,\"two\nlines\"\r\n2013-07-01T06:00Z,18.9,\r\n"
	got := read(iotest.OneByteReader(strings.NewReader(content)), site, "")
	if got.err != nil || got.taken != 2 || got.rows[1].Line != 4 {
		t.Errorf("%+v", got)
	}
}

func TestUnits(t *testing.T) {
	t.Parallel()
	for _, row := range []struct {
		header  string
		asked   planner.Units
		units   planner.Units
		wantC   float64 // of 50
		problem string
	}{
		{"time,temp", "", "", 0, "could be °C or °F"},
		{"time,temp", "c", "c", 50, ""},
		{"time,temp", "f", "f", 10, ""},
		{"time,temp_c", "c", "c", 50, ""},
		{"time,temp_f", "", "f", 10, ""},
		{"time,temp_f", "f", "f", 10, ""},
		{"time,Temperature (ºF)", "f", "f", 10, ""},
		{"time,temperature [degC]", "", "c", 50, ""},
		{"time,air temperature fahrenheit", "", "f", 10, ""},
		{"time,temp_f", "c", "", 0, `the column "temp_f" is in °F, but °C was asked for`},
		{"time,temp_c", "f", "", 0, `the column "temp_c" is in °C, but °F was asked for`},
		{"temp_f,time,temp_c", "f", "f", 50, ""},
		{"temp_c,time,temp_f", "c", "c", 50, ""},
	} {
		// The last two have the value of the other unit in the first column.
		line := "2013-07-01T05:00Z,50"
		if strings.HasPrefix(row.header, "temp") {
			line = map[planner.Units]string{"f": "122,2013-07-01T05:00Z,1", "c": "50,2013-07-01T05:00Z,1"}[row.asked]
		}
		got := read(strings.NewReader(row.header+"\n"+line+"\n"), site, row.asked)
		if row.problem != "" {
			wantProblem(t, got.err, row.problem)
			continue
		}
		if got.err != nil || got.units != row.units || len(got.rows) != 1 || got.rows[0].Reading.C != row.wantC {
			t.Errorf("%s asked %q: %s, %+v, %v; want %s, %g °C", row.header, row.asked, got.units, got.rows, got.err, row.units, row.wantC)
		}
	}
	_, err := intake.Open(strings.NewReader("time,temp\n"), site, intake.How{Units: "kelvin"})
	if planner.KindOf(err) != planner.Invalid {
		t.Errorf("units kelvin: %v", err)
	}
	_, err = intake.Open(strings.NewReader("time,temp\n"), intake.Site{OffsetSeconds: 16 * 3600}, intake.How{})
	if planner.KindOf(err) != planner.Invalid {
		t.Errorf("a site at +16:00: %v", err)
	}
}

func TestClockIsNotKnownBeforeATime(t *testing.T) {
	t.Parallel()
	file, err := intake.Open(strings.NewReader("time,temp_c\n2013-07-01T05:00Z,17.8\n"), site, intake.How{})
	if err != nil || file.Clock() != "" {
		t.Errorf("clock %q, error %v", file.Clock(), err)
	}
}

func TestHeaders(t *testing.T) {
	t.Parallel()
	for _, row := range []struct {
		content string
		format  string // "" when refused
		problem string
	}{
		{"  TIME  , Dry_Bulb-Temp \n", "readings", ""},
		{"time,temp_c,time c,t (F)\n", "readings", ""}, // the last two: no time, and the other unit
		{"\n\n\"time\",\"temp\nc\"\n2013-07-01T05:00Z,1\n", "readings", ""},
		{"date,temp,high,low\n\n,,,\n2013-07-01,1,2,0\n", "daily", ""},
		{"date,temp,high,low\n2013-07-01 00:00,1,2,0\n", "readings", ""},
		{"date,temp,high,low\n\"x\"y,1,2,0\n2013-07-01,1,2,0\n", "daily", ""}, // the second row says
		{"date,temp,high,low\n", "readings", ""},
		{"date,high,low,high\n", "", `"high", "high" could each be the high`},
		{"time,a,b,c,d,e,f,g,h,i,j,k,l,m\n", "", `"k", and 2 more`},
		{"time,temp,\"x\n", "", "broken quotes"},
		{"time,\"a\"\n\"temp\n", "", "no column for a temperature"},
		{"date,mean\n2013-07-01,3\n", "", "no column for a temperature"},
	} {
		got := read(strings.NewReader(row.content), site, "")
		if row.format == "" {
			wantProblem(t, got.err, row.problem)
		} else if got.err != nil || got.format != row.format {
			t.Errorf("%q: format %q, error %v; want %s", row.content, got.format, got.err, row.format)
		}
	}
}

func TestUnknownColumnsAreLeftAlone(t *testing.T) {
	t.Parallel()
	got := read(strings.NewReader("station,time,rh,temp_c,precipitation,wind,weather,temp_flag\nKXXX,2013-07-01T05:00Z,x,17.8,y,-9999,\"a,b\",z\n"), site, "")
	if got.err != nil || len(got.rows) != 1 || got.rows[0].Reading.C != 17.8 {
		t.Errorf("%+v", got)
	}
}
