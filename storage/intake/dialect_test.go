package intake_test

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"slices"
	"strings"
	"testing"
	"time"
	"unicode/utf16"

	"pgregory.net/rapid"

	"swardbook/planner"
	"swardbook/storage/intake"
)

func filesIn(t *testing.T, dir string) int {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	return len(entries)
}

// dialect is one way of writing a file of readings.
type dialect struct {
	sign       string
	comma      bool // decimal comma
	quoted     bool
	date       string // layouts of package time
	clock      string
	columns    bool // date and clock in two
	header     [3]string
	fahrenheit bool
	zone       *time.Location // whose clock it is written on
	suffix     string         // behind the clock
	how        intake.How
	end        string
	above      string
	below      string
	backwards  bool
	encode     func(testing.TB, []byte) []byte
}

func utf16With(order binary.AppendByteOrder, mark bool) func(testing.TB, []byte) []byte {
	return func(_ testing.TB, text []byte) (out []byte) {
		if mark {
			out = order.AppendUint16(out, 0xFEFF)
		}
		for _, unit := range utf16.Encode([]rune(string(text))) {
			out = order.AppendUint16(out, unit)
		}
		return out
	}
}

func windows1252(_ testing.TB, text []byte) []byte {
	return bytes.ReplaceAll(text, []byte("°"), []byte{0xB0})
}

func drawDialect(t *rapid.T, site intake.Site) dialect {
	draw := func(name string, of ...string) string { return rapid.SampledFrom(of).Draw(t, name) }
	yes := func(name string) bool { return rapid.Bool().Draw(t, name) }
	standard := time.FixedZone("standard", site.OffsetSeconds)
	d := dialect{
		sign: draw("separator", ",", ";", "\t", "|"), quoted: yes("quoted"), columns: yes("two columns"), fahrenheit: yes("fahrenheit"),
		date:  draw("date", "2006-01-02", "2006/01/02", "02/01/2006", "2/1/06", "01/02/2006", "1/2/06", "02.01.2006", "20060102", "2 Jan 2006", "Jan 2, 2006", "02-Jan-06"),
		clock: draw("clock", "15:04", "15:04:05", "3:04 PM", "03:04:05 pm", "1504", "15.04"),
		end:   draw("line end", "\n", "\r\n", "\r"), backwards: yes("newest first"),
		above: draw("above", "", "Report\nPrinted by nobody\n", "\n\nStation: shed\n"), below: draw("below", "", "Average 12\n", "# end\n"),
		header: [3]string{draw("time name", "time", "Datum", "Date et heure", "fecha"), draw("clock name", "time of day", "Uhrzeit", "heure", "hora"),
			draw("temperature name", "temp", "Temperatur", "Air Temp.", "temperatura", "lufttemperatur")},
		zone: standard,
	}
	d.comma = yes("decimal comma") && (d.sign != "," || d.quoted)
	if strings.Contains(d.date, ",") && d.sign == "," {
		d.quoted = true
	}
	switch draw("zone", "standard", "utc in header", "offset", "wall", "stated utc") {
	case "utc in header":
		d.zone, d.header[0] = time.UTC, d.header[0]+" (UTC)"
	case "offset":
		d.zone, d.suffix = time.FixedZone("", 2*3600), " +02:00"
	case "wall":
		d.zone, d.how.Clock = site.Zone, "wall"
	case "stated utc":
		d.zone, d.how.Clock = time.UTC, "utc"
	}
	d.header[2] += map[bool]string{false: " (°C)", true: " [°F]"}[d.fahrenheit]
	encodings := map[string]func(testing.TB, []byte) []byte{
		"utf-8": func(_ testing.TB, text []byte) []byte { return text }, "mark": func(_ testing.TB, text []byte) []byte { return append([]byte("\xEF\xBB\xBF"), text...) },
		"utf-16 le": utf16With(binary.LittleEndian, false), "utf-16 be mark": utf16With(binary.BigEndian, true), "windows-1252": windows1252,
		"gzip": gzipped, "zip": func(t testing.TB, text []byte) []byte { return zipped(t, map[string][]byte{"a.csv": text}) },
	}
	d.encode = encodings[draw("encoding", "utf-8", "mark", "utf-16 le", "utf-16 be mark", "windows-1252", "gzip", "zip")]
	return d
}

// write writes the readings in the dialect.
func (d dialect) write(t testing.TB, readings []planner.Reading) []byte {
	if d.backwards {
		readings = slices.Clone(readings)
		slices.Reverse(readings)
	}
	mark := map[bool]string{true: `"`}[d.quoted]
	join := func(values ...string) string {
		return mark + strings.Join(values, mark+d.sign+mark) + mark + "\n"
	}
	var b strings.Builder
	b.WriteString(d.above)
	if d.columns {
		b.WriteString(join("No", d.header[0], d.header[1], d.header[2]))
	} else {
		b.WriteString(join("No", d.header[0], d.header[2]))
	}
	for i, reading := range readings {
		value := reading.C
		if d.fahrenheit {
			value = value*9/5 + 32
		}
		text := fmt.Sprintf("%.6f", value)
		if d.comma {
			text = strings.Replace(text, ".", ",", 1)
		}
		at := time.Unix(reading.At, 0).In(d.zone)
		date, clock := at.Format(d.date), at.Format(d.clock)+d.suffix
		if d.columns {
			b.WriteString(join(fmt.Sprint(i), date, clock, text))
		} else {
			b.WriteString(join(fmt.Sprint(i), date+" "+clock, text))
		}
	}
	b.WriteString(d.below)
	return d.encode(t, []byte(strings.ReplaceAll(b.String(), "\n", d.end)))
}

// The same readings in any dialect are the same readings, and so the same days.
func TestAnyDialectOfTheSameReadings(t *testing.T) {
	t.Parallel()
	for _, name := range []string{"America/New_York", "Europe/Dublin", "Australia/Adelaide", "UTC"} {
		zone := zone(name)
		site := intake.Site{OffsetSeconds: planner.StandardOffset(zone, 2013), Zone: zone}
		t.Run(name, func(t *testing.T) {
			t.Parallel()
			rapid.Check(t, func(r *rapid.T) {
				// 20 days, so that some day of the month is past the 12th; across the
				// changes of the clocks too.
				start := time.Date(2013, time.Month(rapid.IntRange(1, 12).Draw(r, "month")), rapid.IntRange(1, 28).Draw(r, "day"), 0, 0, 0, 0, time.UTC).Unix()
				var want []planner.Reading
				for i := range 20 * 24 {
					c := rapid.Float64Range(-30, 40).Draw(r, "°C")
					want = append(want, planner.Reading{At: start + int64(i)*3600, C: math.Round(c*10) / 10})
				}
				d := drawDialect(r, site)
				content := d.write(t, want)
				got := readHow(bytes.NewReader(content), site, d.how)
				if got.err != nil || len(got.refusals) > 0 || len(got.rows) != len(want) {
					r.Fatalf("%d rows, refused %v, error %v; want %d of\n%.400s", len(got.rows), got.refusals, got.err, len(want), content)
				}
				slices.SortFunc(got.rows, func(a, b intake.Row) int { return int(a.Reading.At - b.Reading.At) })
				for i, row := range got.rows {
					if row.Reading.At != want[i].At || math.Abs(row.Reading.C-want[i].C) > 1e-6 {
						r.Fatalf("reading %d is %s %.3f, want %s %.1f of\n%.400s", i, utc(row.Reading.At), row.Reading.C, utc(want[i].At), want[i].C, content)
					}
				}
			})
		})
	}
}
