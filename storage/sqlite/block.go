package sqlite

import (
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"math"
	"math/bits"
	"slices"

	"swardbook/planner"
)

// Day facts are kept in blocks of 64 days, for a row read through the driver
// costs more than what is in it: ten years are 3,650 days and 58 blocks.
const blockDays = 64

// blockForm is the first byte of a packed block and says how the rest is
// written. A form once written stays readable.
//
//	1 byte    the form
//	4 bytes   CRC-32 (IEEE) of all that follows
//	8 bytes   the days that are known: bit n is day 64 × block + n
//
// and for each known day, in order
//
//	1 byte    knowsExtremes, knowsMean and isPublished, added up
//	1 byte    the source of the extremes
//	varints   hours real, bridged and wanted
//	8 bytes   high, low and 24-hour mean, each if it is known
//	uvarint   number of hourly values; if there are any
//	          1 byte, their scale, and each: float64, or 2 bytes, see scale
//	uvarint   length of the doubt, and its text
//
// Fixed numbers are little-endian, temperatures float64 in °C.
const blockForm = 1

// What is known of a day.
const (
	knowsExtremes = 1 << iota
	knowsMean
	isPublished
	beyondKnown // no day has this or more
)

// blockHead is the number of bytes before the first day, blockSummed the one
// from which on they are summed up.
const (
	blockSummed = 1 + 4
	blockHead   = blockSummed + 8
)

// blockOf is the number of the block that holds the day.
func blockOf(day planner.Day) int64 { return floorDiv(int64(day), blockDays) }

// packDays writes the known days of one block, which come in order.
func packDays(days []planner.DayFacts) []byte {
	size := blockHead
	for _, f := range days {
		size += 48 + 8*len(f.HoursC) + len(f.Doubt)
	}
	packed := make([]byte, blockHead, size)
	var known uint64
	for _, f := range days {
		known |= 1 << (int64(f.Day) - blockOf(f.Day)*blockDays)
		packed = packDay(packed, f)
	}
	packed[0] = blockForm
	binary.LittleEndian.PutUint64(packed[blockSummed:], known)
	binary.LittleEndian.PutUint32(packed[1:], crc32.ChecksumIEEE(packed[blockSummed:]))
	return packed
}

func packDay(packed []byte, f planner.DayFacts) []byte {
	number := func(c float64) { packed = binary.LittleEndian.AppendUint64(packed, math.Float64bits(c)) }
	var known byte
	if f.HasExtremes {
		known |= knowsExtremes
	}
	if f.HasHourly {
		known |= knowsMean
	}
	if f.Published {
		known |= isPublished
	}
	packed = append(packed, known, byte(f.ExtremesFrom))
	for _, hours := range []int{f.SlotsReal, f.SlotsBridged, f.SlotsWanted} {
		packed = binary.AppendVarint(packed, int64(hours))
	}
	if f.HasExtremes {
		number(f.HighC)
		number(f.LowC)
	}
	if f.HasHourly {
		number(f.HourlyC)
	}
	packed = packHours(packed, f.HoursC)
	packed = binary.AppendUvarint(packed, uint64(len(f.Doubt)))
	return append(packed, f.Doubt...)
}

// scale says how the hourly values of a day are written. Nearly all are tenths
// of a degree as the thermometer gave them, and a value that is exactly one
// takes 2 bytes for 8: they are most of a block, and of what it costs to read.
type scale byte

const (
	asFloats  scale = iota
	asTenthsC       // int16, tenths of °C
	asTenthsF       // int16, tenths of °F
	beyondScales
)

// width is the number of bytes of a value.
func (s scale) width() uint64 {
	if s == asFloats {
		return 8
	}
	return 2
}

// celsius is the value of n tenths. It may never change by a bit: blocks that
// are kept are read with it.
func (s scale) celsius(n int16) float64 {
	if s == asTenthsF {
		return (float64(n)/10 - 32) / 1.8
	}
	return float64(n) / 10
}

// tenths gives the number of tenths that is exactly the value.
func (s scale) tenths(c float64) (n int16, exact bool) {
	degrees := c
	if s == asTenthsF {
		degrees = c*1.8 + 32
	}
	n = int16(math.Round(degrees * 10))
	return n, math.Float64bits(s.celsius(n)) == math.Float64bits(c)
}

// scaleOf is the shortest scale that keeps all values as they are.
func scaleOf(hoursC []float64) scale {
	for _, s := range []scale{asTenthsC, asTenthsF} {
		if !slices.ContainsFunc(hoursC, func(c float64) bool { _, exact := s.tenths(c); return !exact }) {
			return s
		}
	}
	return asFloats
}

func packHours(packed []byte, hoursC []float64) []byte {
	packed = binary.AppendUvarint(packed, uint64(len(hoursC)))
	if len(hoursC) == 0 {
		return packed
	}
	s := scaleOf(hoursC)
	packed = append(packed, byte(s))
	for _, c := range hoursC {
		if s == asFloats {
			packed = binary.LittleEndian.AppendUint64(packed, math.Float64bits(c))
			continue
		}
		n, _ := s.tenths(c)
		packed = binary.LittleEndian.AppendUint16(packed, uint16(n))
	}
	return packed
}

// unpackDays adds the known days of a packed block to days, and an empty day for
// each that is left out between two. A block that packDays has not written, or
// that holds what no day can have, is an error. It keeps nothing of packed.
func unpackDays(days []planner.DayFacts, block int64, packed []byte) ([]planner.DayFacts, error) {
	switch {
	case block < blockOf(planner.DayMin) || block > blockOf(planner.DayMax):
		return nil, errors.New("it is outside the years 1700 to 2299")
	case len(packed) < blockHead:
		return nil, errShort
	case packed[0] != blockForm:
		return nil, fmt.Errorf("it is written in form %d, which this program does not know", packed[0])
	case binary.LittleEndian.Uint32(packed[1:]) != crc32.ChecksumIEEE(packed[blockSummed:]):
		return nil, errors.New("its checksum is another one")
	}
	u := unpacking{packed: packed, at: blockHead}
	for known := binary.LittleEndian.Uint64(packed[blockSummed:]); known != 0; known &= known - 1 {
		day := planner.Day(block*blockDays) + planner.Day(bits.TrailingZeros64(known))
		for n := len(days); n > 0 && days[n-1].Day+1 < day; n++ {
			days = append(days, planner.DayFacts{Day: days[n-1].Day + 1})
		}
		days = append(days, planner.DayFacts{Day: day})
		u.day(&days[len(days)-1], bits.OnesCount64(known))
		if u.fault != nil {
			return nil, fmt.Errorf("%s: %w", day, u.fault)
		}
	}
	if left := len(packed) - u.at; left > 0 {
		return nil, fmt.Errorf("%d bytes are too many", left)
	}
	return days, nil
}

var errShort = errors.New("it ends too soon")

// unpacking takes values off a block. After the first fault what it gives means
// nothing. Places are numbers: to move a slice along costs much more while
// memory is being collected.
type unpacking struct {
	packed []byte
	at     int       // the next byte
	room   []float64 // for hourly values
	used   int       // of room
	fault  error
}

// day takes one day, the first of so many.
func (u *unpacking) day(f *planner.DayFacts, of int) {
	if f.Day < planner.DayMin || f.Day > planner.DayMax {
		u.refuse(errors.New("it is outside the years 1700 to 2299"))
	}
	known, from := u.one(), u.one()
	if known >= beyondKnown {
		u.refuse(fmt.Errorf("what is known of it, %d, is not known", known))
	}
	if f.ExtremesFrom = planner.Source(from); f.ExtremesFrom > planner.FromAhead {
		u.refuse(fmt.Errorf("source %d of its extremes is not known", from))
	}
	f.HasExtremes, f.HasHourly, f.Published = known&knowsExtremes != 0, known&knowsMean != 0, known&isPublished != 0
	f.SlotsReal, f.SlotsBridged, f.SlotsWanted = u.count(), u.count(), u.count()
	if f.HasExtremes {
		f.HighC, f.LowC = u.temperature(), u.temperature()
	}
	if f.HasHourly {
		f.HourlyC = u.temperature()
	}
	f.HoursC = u.hours(of)
	if f.HoursC == nil && f.HasHourly && !f.Published {
		u.refuse(errors.New("the hourly values of its 24-hour mean are missing"))
	}
	f.Doubt = u.text()
}

// refuse keeps the first fault.
func (u *unpacking) refuse(fault error) {
	if u.fault == nil {
		u.fault = fault
	}
}

// take gives the next n bytes, nil when there are not so many.
func (u *unpacking) take(n uint64) []byte {
	if n > uint64(len(u.packed)-u.at) {
		u.refuse(errShort)
		u.at = len(u.packed)
		return nil
	}
	from := u.at
	u.at += int(n)
	return u.packed[from:u.at]
}

func (u *unpacking) one() byte {
	if taken := u.take(1); taken != nil {
		return taken[0]
	}
	return 0
}

func (u *unpacking) count() int {
	value, n := binary.Varint(u.packed[u.at:])
	if u.take(uint64(max(n, 0))); n <= 0 || int64(int(value)) != value {
		u.refuse(errShort)
	}
	return int(value)
}

// length gives the number of things that follow, a byte each or more.
func (u *unpacking) length() uint64 {
	value, n := binary.Uvarint(u.packed[u.at:])
	if u.take(uint64(max(n, 0))); n <= 0 || value > uint64(len(u.packed)-u.at) {
		u.refuse(errShort)
		return 0
	}
	return value
}

func (u *unpacking) temperature() float64 {
	taken := u.take(8)
	if taken == nil {
		return 0
	}
	c := math.Float64frombits(binary.LittleEndian.Uint64(taken))
	if err := planner.CheckTemperature(c); err != nil {
		u.refuse(err)
	}
	return c
}

// hours gives the hourly values, nil for none, of the first of so many days.
func (u *unpacking) hours(days int) []float64 {
	n := int(u.length())
	if n == 0 {
		return nil
	}
	s := scale(u.one())
	if s >= beyondScales {
		u.refuse(fmt.Errorf("scale %d of its hourly values is not known", s))
		return nil
	}
	taken := u.take(uint64(n) * s.width())
	if taken == nil {
		return nil
	}
	if len(u.room)-u.used < n {
		u.room, u.used = make([]float64, max(n, 24*days)), 0
	}
	hoursC := u.room[u.used : u.used+n : u.used+n]
	u.used += n
	for i := range hoursC {
		if s == asFloats {
			hoursC[i] = math.Float64frombits(binary.LittleEndian.Uint64(taken[8*i:]))
		} else {
			hoursC[i] = s.celsius(int16(binary.LittleEndian.Uint16(taken[2*i:])))
		}
		if !(hoursC[i] >= planner.LowestC && hoursC[i] <= planner.HighestC) { // called only then: there are tens of thousands
			u.refuse(planner.CheckTemperature(hoursC[i]))
		}
	}
	return hoursC
}

func (u *unpacking) text() string { return string(u.take(u.length())) }
