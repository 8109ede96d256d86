package intake_test

import (
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"swardbook/planner"
	"swardbook/storage/intake"
)

// writtenTime writes an instant in one of the accepted forms.
func writtenTime(t *rapid.T, at int64, site intake.Site) string {
	offset := site.OffsetSeconds
	zone := ""
	if rapid.Bool().Draw(t, "has offset") {
		offset = rapid.IntRange(-15*60, 15*60).Draw(t, "offset in minutes") * 60
		sign, size := "+", offset/60
		if size < 0 {
			sign, size = "-", -size
		}
		forms := []string{fmt.Sprintf("%s%02d:%02d", sign, size/60, size%60), fmt.Sprintf("%s%02d%02d", sign, size/60, size%60)}
		if size%60 == 0 {
			forms = append(forms, fmt.Sprintf("%s%02d", sign, size/60))
		}
		if size == 0 {
			forms = append(forms, "Z")
		}
		zone = rapid.SampledFrom([]string{"", " "}).Draw(t, "space") + rapid.SampledFrom(forms).Draw(t, "zone")
	}
	local := time.Unix(at+int64(offset), 0).UTC()
	clock := local.Format("15:04:05")
	if local.Second() == 0 && rapid.Bool().Draw(t, "without seconds") {
		clock = local.Format("15:04")
	}
	if clock == "00:00" && rapid.Bool().Draw(t, "as 24:00") {
		local, clock = local.AddDate(0, 0, -1), "24:00"
	}
	if len(clock) == 8 {
		clock += rapid.SampledFrom([]string{"", ".0", ".999"}).Draw(t, "fraction")
	}
	return local.Format("2006-01-02") + rapid.SampledFrom([]string{"T", " "}).Draw(t, "separator") + clock + zone
}

// Readings written in any of the accepted forms are read back the same.
func TestReadingsComeBack(t *testing.T) {
	t.Parallel()
	rapid.Check(t, func(t *rapid.T) {
		site := intake.Site{OffsetSeconds: rapid.IntRange(-12*4, 14*4).Draw(t, "site in quarter hours") * 900}
		end := rapid.SampledFrom([]string{"\n", "\r\n"}).Draw(t, "line end")
		mark := rapid.SampledFrom([]string{"", `"`}).Draw(t, "quote")
		var b strings.Builder
		b.WriteString(rapid.SampledFrom([]string{"", "\ufeff"}).Draw(t, "mark") + "Station,Time,Remark,Temp_C" + end)
		var want []planner.Reading
		for range rapid.IntRange(0, 30).Draw(t, "rows") {
			// Two days inside the bounds, so that no offset leaves them.
			at := rapid.Int64Range(int64(planner.DayMin+2)*86400, int64(planner.DayMax-1)*86400).Draw(t, "at")
			at -= rapid.SampledFrom([]int64{0, at % 60, at % 86400}).Draw(t, "rounding")
			c := math.Round(rapid.Float64Range(planner.LowestC, planner.HighestC).Draw(t, "°C")*100) / 100
			want = append(want, planner.Reading{At: at, C: c})
			fmt.Fprintf(&b, "%[1]sKXXX%[1]s,%[1]s%[2]s%[1]s,%[3]s,%[1]s%[4]s%[1]s%[5]s", mark, writtenTime(t, at, site),
				rapid.SampledFrom([]string{"", "dry", `"a, b"`, "\"two\nlines\"", `"say ""wet"""`}).Draw(t, "remark"),
				strconv.FormatFloat(c, 'f', -1, 64), end)
		}
		got := read(strings.NewReader(b.String()), site, "")
		if got.err != nil || len(got.refusals) > 0 || len(got.rows) != len(want) {
			t.Fatalf("%d rows, refused %v, error %v; want %d of\n%s", len(got.rows), got.refusals, got.err, len(want), b.String())
		}
		for i, row := range got.rows {
			if row.Reading != want[i] {
				t.Fatalf("row %d is %+v, want %+v of\n%s", i, row.Reading, want[i], b.String())
			}
		}
	})
}

// Daily highs and lows in °F come back in °C to within rounding.
func TestDailyFahrenheitComesBack(t *testing.T) {
	t.Parallel()
	rapid.Check(t, func(t *rapid.T) {
		day := planner.Day(rapid.Int32Range(int32(planner.DayMin), int32(planner.DayMax)).Draw(t, "day"))
		lowF := float64(rapid.IntRange(-1390, 1430).Draw(t, "low")) / 10
		highF := lowF + float64(rapid.IntRange(0, int((143-lowF)*10)).Draw(t, "range"))/10
		content := fmt.Sprintf("date,high_f,low_f\n%s,%.1f,%.1f\n", day, highF, lowF)
		got := read(strings.NewReader(content), site, "")
		if got.err != nil || len(got.rows) != 1 {
			t.Fatalf("%v %v of %s", got.err, got.refusals, content)
		}
		row := got.rows[0].Day
		if row.Day != day || math.Abs(row.HighC-(highF-32)*5/9) > 1e-9 || math.Abs(row.LowC-(lowF-32)*5/9) > 1e-9 {
			t.Fatalf("%+v of %s", row, content)
		}
	})
}

// million is a file of so many readings a minute apart.
func million(rows int) string {
	var b strings.Builder
	b.WriteString("time,temp_c,rh\n")
	at := time.Date(2013, 1, 1, 0, 0, 0, 0, time.UTC)
	for i := range rows {
		fmt.Fprintf(&b, "%s,%.1f,%d\n", at.Format("2006-01-02T15:04-05:00"), float64(i%400)/10-10, 40+i%60)
		at = at.Add(time.Minute)
	}
	return b.String()
}

// BenchmarkMillionReadings reads 1,000,000 rows an operation.
func BenchmarkMillionReadings(b *testing.B) {
	const rows = 1_000_000
	content := million(rows)
	b.SetBytes(int64(len(content)))
	for b.Loop() {
		file, err := intake.Open(strings.NewReader(content), site, intake.How{})
		if err != nil {
			b.Fatal(err)
		}
		taken := 0
		for {
			_, err := file.Next()
			if err == io.EOF {
				break
			}
			if err != nil {
				b.Fatal(err)
			}
			taken++
		}
		if err := file.Close(); err != nil {
			b.Fatal(err)
		}
		if taken != rows {
			b.Fatalf("%d rows", taken)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/rows, "ns/row")
}
