package sqlite

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"hash/crc32"
	"math"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"swardbook/calc"
	"swardbook/planner"
)

// A block written by hand: bytes that a file may hold may never be read as
// something else. The float64 are those of IEEE 754: 0.5 is 3FE0…, 1 is 3FF0…,
// 2 is 4000…; 12.3 °C is 123 tenths, 7B; −0.5 °C is −5, FFFB; 50.1 °F is
// 501 tenths of °F, 1F5.
func TestBlockByHand(t *testing.T) {
	const (
		half, one, two = "000000000000E03F", "000000000000F03F", "0000000000000040"
		days           = "0100000000000082" // the bits 0, 57 and 63
		full           = "03 02 30 02 2E" + two + one + half + "02 01 7B00 FBFF" + "00"
		published      = "06 00 00 00 00" + one + "02 00" + half + two + "02 C3A4"
		fahrenheit     = "02 00 02 00 02" + one + "01 02 F501" + "00"
	)
	body := unhex(t, days+full+published+fahrenheit)
	packed := append([]byte{1}, binary.LittleEndian.AppendUint32(nil, crc32.ChecksumIEEE(body))...)
	packed = append(packed, body...)
	want := []planner.DayFacts{
		{Day: -128, HasExtremes: true, HighC: 2, LowC: 1, ExtremesFrom: planner.FromHourly, HasHourly: true, HourlyC: 0.5,
			SlotsReal: 24, SlotsBridged: 1, SlotsWanted: 23, HoursC: []float64{12.3, -0.5}},
		{Day: -71, HasHourly: true, HourlyC: 1, Published: true, HoursC: []float64{0.5, 2}, Doubt: "ä"},
		{Day: -65, HasHourly: true, HourlyC: 1, SlotsReal: 1, SlotsWanted: 1, HoursC: []float64{calc.CelsiusFromFahrenheit(50.1)}},
	}
	got, err := unpackDays(nil, -2, packed)
	if err != nil || len(got) != 64 {
		t.Fatalf("%d days, %v", len(got), err)
	}
	for i, facts := range got {
		if facts.Day != planner.Day(-128+i) || i != 0 && i != 57 && i != 63 && !reflect.DeepEqual(facts, planner.DayFacts{Day: facts.Day}) {
			t.Errorf("a day between: %+v", facts)
		}
	}
	if known := []planner.DayFacts{got[0], got[57], got[63]}; !reflect.DeepEqual(known, want) {
		t.Errorf("read as %+v, want %+v", known, want)
	}
	// Written, the hours of the second day take the shorter form: they are tenths.
	if again := packDays(want); !bytes.HasPrefix(again[blockHead:], unhex(t, full)) || !bytes.HasSuffix(again, unhex(t, fahrenheit)) {
		t.Errorf("written as %X", again)
	}
}

func unhex(t *testing.T, text string) []byte {
	t.Helper()
	var out []byte
	if _, err := fmt.Sscanf(strings.ReplaceAll(text, " ", ""), "%X", &out); err != nil {
		t.Fatal(err)
	}
	return out
}

// Every field of a day that a station can have is kept; a field that is added
// to planner.DayFacts and not to the blocks shows here.
func TestBlockKeepsEveryField(t *testing.T) {
	want := planner.DayFacts{Day: 70, HasExtremes: true, HighC: 20.5, LowC: -1.25, ExtremesFrom: planner.FromHand,
		HasHourly: true, HourlyC: 9.1, Published: true, SlotsReal: 20, SlotsBridged: 3, SlotsWanted: 25,
		HoursC: []float64{1, 2, 3}, Doubt: "stuck at 4.0 °C from 03:00 on"}
	joined := map[string]bool{"Other": true, "OtherDays": true} // what planner.JoinStations adds
	for i := range reflect.TypeFor[planner.DayFacts]().NumField() {
		if name := reflect.TypeFor[planner.DayFacts]().Field(i).Name; !joined[name] && reflect.ValueOf(want).Field(i).IsZero() {
			t.Errorf("%s has no value: the check does not check it", name)
		}
	}
	got, err := unpackDays(nil, 1, packDays([]planner.DayFacts{want}))
	if err != nil || !reflect.DeepEqual(got, []planner.DayFacts{want}) {
		t.Errorf("kept as %+v, %v, want %+v", got, err, want)
	}
}

func temperatures() *rapid.Generator[float64] {
	return rapid.OneOf(
		rapid.Float64Range(planner.LowestC, planner.HighestC),
		rapid.SampledFrom([]float64{planner.LowestC, planner.HighestC, 0, math.Copysign(0, -1), math.SmallestNonzeroFloat64}),
		rapid.Map(rapid.IntRange(-950, 620), func(n int) float64 { return float64(n) / 10 }),
		rapid.Map(rapid.IntRange(-1390, 1430), func(n int) float64 { return calc.CelsiusFromFahrenheit(float64(n) / 10) }))
}

func factsOn(day planner.Day) *rapid.Generator[planner.DayFacts] {
	return rapid.Custom(func(t *rapid.T) planner.DayFacts {
		c := temperatures()
		f := planner.DayFacts{Day: day, HasExtremes: rapid.Bool().Draw(t, "extremes"), HasHourly: rapid.Bool().Draw(t, "hourly"),
			Published: rapid.Bool().Draw(t, "published"), ExtremesFrom: planner.Source(rapid.IntRange(0, int(planner.FromAhead)).Draw(t, "from")),
			SlotsReal: rapid.Int().Draw(t, "real"), SlotsBridged: rapid.Int().Draw(t, "bridged"), SlotsWanted: rapid.Int().Draw(t, "wanted"),
			Doubt: rapid.String().Draw(t, "doubt")}
		if f.HasExtremes {
			f.HighC, f.LowC = c.Draw(t, "high"), c.Draw(t, "low")
		}
		if f.HasHourly {
			f.HourlyC = c.Draw(t, "mean")
		}
		if f.HasHourly && !f.Published || rapid.Bool().Draw(t, "has hours") {
			of := rapid.SampledFrom([]*rapid.Generator[float64]{c,
				rapid.Map(rapid.IntRange(-950, 620), func(n int) float64 { return float64(n) / 10 }),
				rapid.Map(rapid.IntRange(-1390, 1430), func(n int) float64 { return calc.CelsiusFromFahrenheit(float64(n) / 10) })}).Draw(t, "of")
			f.HoursC = rapid.SliceOfN(of, 1, 49).Draw(t, "hours")
		}
		return f
	})
}

// same compares days to the bit: reflect takes -0 for 0.
func same(a, b []planner.DayFacts) bool {
	return reflect.DeepEqual(a, b) && fmt.Sprintf("%v", a) == fmt.Sprintf("%v", b)
}

func TestBlocksKeepDaysExactly(t *testing.T) {
	t.Parallel()
	rapid.Check(t, func(t *rapid.T) {
		block := rapid.Int64Range(blockOf(planner.DayMin)+1, blockOf(planner.DayMax)-1).Draw(t, "block")
		var want []planner.DayFacts
		places := rapid.SliceOfNDistinct(rapid.SampledFrom([]int64{0, 1, 31, 32, 62, 63}), 1, 4, rapid.ID).Draw(t, "days")
		slices.Sort(places)
		for _, place := range places {
			want = append(want, factsOn(planner.Day(block*blockDays+place)).Draw(t, "facts"))
		}
		got, err := unpackDays(nil, block, packDays(want))
		if err != nil {
			t.Fatal(err)
		}
		known := got[:0:0]
		for i, facts := range got {
			switch {
			case facts.Day != got[0].Day+planner.Day(i):
				t.Fatalf("%s stands on place %d", facts.Day, i)
			case len(known) < len(want) && facts.Day == want[len(known)].Day:
				known = append(known, facts)
			case !reflect.DeepEqual(facts, planner.DayFacts{Day: facts.Day}):
				t.Fatalf("%+v was not written", facts)
			}
		}
		if !same(known, want) {
			t.Fatalf("kept as %+v, want %+v", known, want)
		}
	})
}

// Every tenth of a degree that a file can hold takes two bytes, and comes back
// as the number that strconv reads of the decimals, or that calc makes of it.
func TestTenthsTakeTwoBytes(t *testing.T) {
	celsius := func(n int) float64 {
		c, err := strconv.ParseFloat(fmt.Sprintf("%de-1", n), 64)
		if err != nil {
			t.Fatal(err)
		}
		return c
	}
	fahrenheit := func(n int) float64 { return calc.CelsiusFromFahrenheit(celsius(n)) }
	for _, row := range []struct {
		name        string
		first, last int
		value       func(int) float64
		scale       scale
	}{{"°C", -950, 620, celsius, asTenthsC}, {"°F", -1390, 1436, fahrenheit, asTenthsF}} {
		for n := row.first; n <= row.last; n++ {
			c := row.value(n)
			if math.Float64bits(row.scale.celsius(int16(n))) != math.Float64bits(c) {
				t.Fatalf("%d tenths of %s are %v, want %v", n, row.name, row.scale.celsius(int16(n)), c)
			}
			if got, exact := row.scale.tenths(c); got != int16(n) || !exact {
				t.Fatalf("%v is %d tenths of %s, exactly %v; want %d", c, got, row.name, exact, n)
			}
		}
	}
	for _, row := range []struct {
		hoursC []float64
		want   scale
	}{
		{[]float64{12.3, -4}, asTenthsC}, {[]float64{fahrenheit(331), fahrenheit(-40)}, asTenthsF},
		{[]float64{12.3, 12.35}, asFloats}, {[]float64{12.3, fahrenheit(331)}, asFloats},
		{[]float64{math.Copysign(0, -1)}, asFloats}, {[]float64{0.30000000000000004}, asFloats},
	} {
		if got := scaleOf(row.hoursC); got != row.want {
			t.Errorf("%v are written in scale %d, want %d", row.hoursC, got, row.want)
		}
	}
}

// someBlock is the days of a block with all that a block can have.
func someBlock() []planner.DayFacts {
	return []planner.DayFacts{
		{Day: 3, HasExtremes: true, HighC: 20, LowC: 10, ExtremesFrom: planner.FromStation, HasHourly: true, HourlyC: 15, Published: true},
		{Day: 4, HasHourly: true, HourlyC: 15, SlotsReal: 300, SlotsWanted: 24, HoursC: []float64{14.9, 15.1}},
		{Day: 5, HasHourly: true, HourlyC: 15, HoursC: []float64{14.95, 15.05}, Doubt: "a leap of 20 °C"},
	}
}

// sealed gives the block the form and the checksum that it should have.
func sealed(packed []byte) []byte {
	packed = bytes.Clone(packed)
	if len(packed) >= blockHead {
		packed[0] = blockForm
		binary.LittleEndian.PutUint32(packed[1:], crc32.ChecksumIEEE(packed[blockSummed:]))
	}
	return packed
}

func TestDamagedBlocks(t *testing.T) {
	good := packDays(someBlock())
	if days, err := unpackDays(nil, 0, good); err != nil || !same(days, someBlock()) {
		t.Fatalf("the whole block: %+v, %v", days, err)
	}
	for i := range good { // a byte that is lost, a bit that is another
		if _, err := unpackDays(nil, 0, good[:i]); err == nil {
			t.Errorf("the first %d of %d bytes are taken for a block", i, len(good))
		}
		if _, err := unpackDays(nil, 0, sealed(good[:i])); err == nil {
			t.Errorf("the first %d of %d bytes are taken for a block, with their checksum", i, len(good))
		}
		for bit := range 8 {
			bad := bytes.Clone(good)
			bad[i] ^= 1 << bit
			if _, err := unpackDays(nil, 0, bad); err == nil {
				t.Errorf("bit %d of byte %d is another, and nobody sees it", bit, i)
			}
		}
	}
	one := func(f planner.DayFacts) []byte { f.Day = 9; return packDays([]planner.DayFacts{f}) }
	with := func(at int, value byte) []byte { bad := bytes.Clone(good); bad[at] = value; return sealed(bad) }
	for _, row := range []struct {
		name   string
		block  int64
		packed []byte
		says   string
	}{
		{"nothing", 0, nil, "ends too soon"},
		{"another form", 0, append([]byte{2}, good[1:]...), "form 2"},
		{"another checksum", 0, append([]byte{1, 0, 0, 0, 0}, good[5:]...), "checksum"},
		{"more than the days", 0, sealed(append(bytes.Clone(good), 0, 0)), "2 bytes are too many"},
		{"a fact that is none", 0, with(blockHead, 8), "what is known of it, 8"},
		{"a source that is none", 0, one(planner.DayFacts{ExtremesFrom: planner.FromAhead + 1}), "source 6"},
		{"no number", 0, one(planner.DayFacts{HasExtremes: true, HighC: math.NaN()}), "1970-01-10: NaN °C"},
		{"too warm", 0, one(planner.DayFacts{HasHourly: true, Published: true, HourlyC: 62.5}), "62.5 °C"},
		{"an hour of no number", 0, one(planner.DayFacts{HoursC: []float64{1, math.NaN()}}), "NaN °C"},
		{"an hour too cold", 0, one(planner.DayFacts{HoursC: []float64{-95.1}}), "-95.1 °C"},
		{"no hours", 0, one(planner.DayFacts{HasHourly: true, HourlyC: 5}), "hourly values of its 24-hour mean are missing"},
		{"a scale that is none", 0, sealed(append(one(planner.DayFacts{})[:blockHead+5], 1, 3, 0, 0, 0)), "scale 3"},
		{"a count that does not end", 0, sealed(append(one(planner.DayFacts{})[:blockHead+2], bytes.Repeat([]byte{0xff}, 12)...)), "ends too soon"},
		{"more hours than bytes", 0, sealed(append(one(planner.DayFacts{})[:blockHead+5], 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 0xff, 1)), "ends too soon"},
		{"before all days", blockOf(planner.DayMin) - 1, good, "outside the years"},
		{"behind all days", blockOf(planner.DayMax) + 1, good, "outside the years"},
		{"days before the first", blockOf(planner.DayMin), good, "outside the years"},
		{"days behind the last", blockOf(planner.DayMax), packDays([]planner.DayFacts{{Day: 63}}), "outside the years"},
	} {
		if days, err := unpackDays(nil, row.block, row.packed); err == nil || !strings.Contains(err.Error(), row.says) {
			t.Errorf("%s: %+v, %v; want an error with %q", row.name, days, err, row.says)
		}
	}
}

// Whatever bytes a file holds, they give days that can be or an error, and what
// was read is written so that it reads the same.
func FuzzUnpackDays(f *testing.F) {
	f.Add(int64(0), packDays(someBlock()))
	f.Add(int64(-2), packDays([]planner.DayFacts{{Day: -128, SlotsReal: 3}, {Day: -65, HasHourly: true, HourlyC: 1, HoursC: []float64{10}}}))
	f.Add(blockOf(planner.DayMax), packDays([]planner.DayFacts{{Day: planner.DayMax, Doubt: "?"}}))
	f.Fuzz(func(t *testing.T, block int64, packed []byte) {
		for _, packed := range [][]byte{packed, sealed(packed)} {
			days, err := unpackDays(nil, block, packed)
			if err != nil {
				continue
			}
			var known []planner.DayFacts
			for i, facts := range days {
				if blockOf(facts.Day) != block || facts.Day != days[0].Day+planner.Day(i) {
					t.Fatalf("%s is day %d of block %d", facts.Day, i, block)
				}
				for _, c := range append([]float64{facts.HighC, facts.LowC, facts.HourlyC}, facts.HoursC...) {
					if err := planner.CheckTemperature(c); err != nil {
						t.Fatalf("%s: %v", facts.Day, err)
					}
				}
				if !reflect.DeepEqual(facts, planner.DayFacts{Day: facts.Day}) {
					known = append(known, facts)
				}
			}
			again, err := unpackDays(nil, block, packDays(known))
			if err != nil || len(known) > 0 && !same(again, days[known[0].Day-days[0].Day:known[len(known)-1].Day-days[0].Day+1]) {
				t.Fatalf("read as %+v, written and read again as %+v, %v", days, again, err)
			}
		}
	})
}
