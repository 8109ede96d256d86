package intake

import (
	"fmt"
	"strconv"
	"strings"
	"time"

	"swardbook/planner"
)

// zoneNames is what names of zones stand for, in seconds east of UTC; in upper
// case. UTC, GMT, Z and offsets are known without it.
type zoneNames map[string]int

// namesOf are the short names that the zone's clocks go by: EST and EDT in New
// York. A name that stands for more than one offset over the years is left out.
func namesOf(zone *time.Location) zoneNames {
	names := zoneNames{}
	if zone == nil {
		return names
	}
	for year := 1990; year <= 2030; year++ {
		for _, month := range []time.Month{time.January, time.July} {
			name, offset := time.Date(year, month, 1, 12, 0, 0, 0, zone).Zone()
			if before, known := names[name]; known && before != offset {
				names[name] = 99 * secondsPerHour
				continue
			}
			names[name] = offset
		}
	}
	for name, offset := range names {
		if offset > maxOffsetSeconds || name == "" || name[0] == '+' || name[0] == '-' {
			delete(names, name)
		}
	}
	return names
}

// offset reads Z, UTC, GMT, an offset, UTC with an offset, or a known name,
// brackets around it or not.
func (z zoneNames) offset(text string) (seconds int, ok bool) {
	text = strings.ToUpper(strings.Trim(strings.TrimSpace(text), "()[] "))
	if text == "Z" || text == "UTC" || text == "GMT" {
		return 0, true
	}
	if seconds, ok = z[text]; ok {
		return seconds, true
	}
	text = strings.TrimPrefix(strings.TrimPrefix(text, "UTC"), "GMT")
	text = strings.ReplaceAll(strings.TrimSpace(text), "−", "-")
	if len(text) < 2 || text[0] != '+' && text[0] != '-' {
		return 0, false
	}
	hours, minutes, hasMinutes := text[1:], "", false
	if hours, minutes, hasMinutes = strings.Cut(hours, ":"); !hasMinutes && len(hours) == 4 {
		hours, minutes = hours[:2], hours[2:]
	}
	h, err := strconv.ParseUint(hours, 10, 8)
	if err != nil || len(hours) > 2 || len(minutes) != 0 && len(minutes) != 2 {
		return 0, false
	}
	seconds = int(h) * secondsPerHour
	if minutes != "" {
		m, err := strconv.ParseUint(minutes, 10, 8)
		if err != nil || m > 59 {
			return 0, false
		}
		seconds += int(m) * secondsPerMinute
	}
	if seconds > maxOffsetSeconds {
		return 0, false
	}
	if text[0] == '-' {
		seconds = -seconds
	}
	return seconds, true
}

// clockKind is how times without an offset are read.
type clockKind int

const (
	standardClock clockKind = iota
	wallClock
	fixedClock
)

// The words for clock:.
const (
	clockStandard = "standard"
	clockWall     = "wall"
)

// fileClock reads the times of a file that have no offset of their own.
type fileClock struct {
	kind   clockKind
	said   bool // by the header, or by clock:; the file is not asked
	offset int  // seconds east of UTC, of standardClock and fixedClock
	zone   *time.Location
	// backwards says that the newest row is the first.
	backwards bool
	last      int64
	hasLast   bool
	// What has been read so far, for words.
	offsets, bare bool
}

// readClock understands clock:; ok is false when it is empty.
func readClock(text string, site Site) (clock fileClock, ok bool, err error) {
	clock = fileClock{offset: site.OffsetSeconds, zone: site.Zone, said: true}
	switch word := strings.ToLower(strings.TrimSpace(text)); word {
	case "":
		clock.said = false
		return clock, false, nil
	case clockStandard:
		return clock, true, nil
	case clockWall:
		if site.Zone == nil {
			return clock, false, planner.Problemf(planner.Invalid, "the site's zone is not known").WithHint("Use clock:standard or an offset like clock:-05:00.")
		}
		clock.kind = wallClock
		return clock, true, nil
	default:
		offset, known := namesOf(site.Zone).offset(word)
		if !known {
			return clock, false, planner.Problemf(planner.Invalid, "clock %q is not known", cut([]byte(text))).
				WithHint("Use clock:standard (the site's standard time), clock:wall (the clock on the wall), clock:utc, or an offset like clock:+02:00.")
		}
		clock.kind, clock.offset = fixedClock, offset
		return clock, true, nil
	}
}

// instant returns the moment in UTC seconds.
func (c *fileClock) instant(m moment, site Site) (at int64, reason string) {
	if m.hasOffset {
		if at, reason = m.instantAt(m.offset, site); reason == "" {
			c.offsets = true
		}
		return at, reason
	}
	if c.kind != wallClock {
		if at, reason = m.instantAt(c.offset, site); reason == "" {
			c.bare = true
		}
		return at, reason
	}
	if !yearsOK(m.day) {
		return 0, yearsOff
	}
	first, second, count := wallInstants(c.zone, int64(m.day)*secondsPerDay+int64(m.second))
	switch {
	case count == 0:
		return 0, skippedClock
	case count == 1:
		at = first
	case c.backwards: // rows come newest first: the later of the two before the row above
		if at = second; c.hasLast && second >= c.last {
			at = first
		}
	default:
		if at = first; c.hasLast && first <= c.last {
			at = second
		}
	}
	c.last, c.hasLast, c.bare = at, true, true
	return at, ""
}

// words says how the times were read.
func (c *fileClock) words() string {
	bare := ClockSite
	switch c.kind {
	case wallClock:
		bare = ClockWall
	case fixedClock:
		bare = offsetWords(c.offset)
	}
	switch {
	case c.offsets && c.bare && c.kind == standardClock:
		return ClockMixed
	case c.offsets && c.bare:
		return ClockOffset + ", " + bare + " where there is none"
	case c.offsets:
		return ClockOffset
	case c.bare:
		return bare
	}
	return ""
}

// offsetWords writes UTC, or UTC+05:30.
func offsetWords(seconds int) string {
	if seconds == 0 {
		return ClockUTC
	}
	sign, size := "+", seconds
	if size < 0 {
		sign, size = "-", -size
	}
	return fmt.Sprintf("UTC%s%02d:%02d", sign, size/secondsPerHour, size/secondsPerMinute%60)
}

// wallInstants returns the instants at which the zone's clocks show the local
// time, written as seconds since 1970 as if it were UTC: none when they leave
// it out, two when they show it twice, the earlier first.
func wallInstants(zone *time.Location, local int64) (first, second int64, count int) {
	_, before := time.Unix(local-secondsPerDay, 0).In(zone).Zone()
	_, after := time.Unix(local+secondsPerDay, 0).In(zone).Zone()
	shows := func(at int64) bool {
		_, offset := time.Unix(at, 0).In(zone).Zone()
		return at+int64(offset) == local
	}
	early, late := local-int64(max(before, after)), local-int64(min(before, after))
	if shows(early) {
		first, count = early, 1
	}
	if late != early && shows(late) {
		if count++; count == 1 {
			first = late
		} else {
			second = late
		}
	}
	return first, second, count
}

// change is one time at which the zone's clocks are put forward or back.
type change struct {
	// from and to bound the local times that are left out (forward) or shown
	// twice, as if they were UTC; to is not among them.
	from, to int64
	forward  bool
	// What the file has: the last two rows before those times and the first one
	// after them, 0 for none, and rows in them.
	last, earlier, next int64
	inside              bool
	// Rows in those times, and in the hours before, that came twice.
	again, againBefore bool
	seen               map[int64]bool
}

// add takes the local time of a row near the change.
func (c *change) add(local int64, mostSeen int) {
	switch {
	case local >= c.to:
		if c.next == 0 || local < c.next {
			c.next = local
		}
		return
	case local >= c.from:
		c.inside = true
		c.again = c.again || c.seen[local]
	case local >= c.from-nearChange:
		c.againBefore = c.againBefore || c.seen[local]
		if c.last == 0 || local > c.last {
			c.last, c.earlier = local, c.last
		} else if local < c.last && (c.earlier == 0 || local > c.earlier) {
			c.earlier = local
		}
	default:
		return
	}
	if len(c.seen) < mostSeen {
		c.seen[local] = true
	}
}

// spacing is the time between rows just before the change; 0 when it is not
// known.
func (c *change) spacing() int64 {
	if c.earlier == 0 {
		return 0
	}
	return c.last - c.earlier
}

// skips reports whether the row that was due in the times that the clock leaves
// out stands as much later as the clock goes forward.
func (c *change) skips() bool {
	due := c.last + c.spacing()
	return c.spacing() > 0 && !c.inside && due >= c.from && due < c.to && c.next == due+c.to-c.from
}

// single reports whether the times that the clock shows twice, which hold two
// rows of this spacing, came once.
func (c *change) single() bool {
	return c.inside && !c.again && c.spacing() > 0 && c.spacing() <= c.to-c.from
}

// wallEvidence looks whether a file's times skip and double an hour as the
// zone's clocks do.
type wallEvidence struct {
	zone    *time.Location
	changes map[int64]*change
	// The stretch of local time, around the row at work, without a change near.
	quietFrom, quietTo int64
	near               *change
}

const (
	nearChange = 3 * secondsPerHour
	// mostSeen bounds how many times are kept for one change.
	mostSeen = 20_000
	// mostChanges bounds how many changes are looked at; 100 years have 200.
	mostChanges = 400
)

func newWallEvidence(zone *time.Location) *wallEvidence {
	return &wallEvidence{zone: zone, changes: map[int64]*change{}}
}

// add takes the local time of a row, in the order of the file.
func (w *wallEvidence) add(local int64) {
	if local < w.quietFrom || local >= w.quietTo {
		w.look(local)
	}
	if w.near != nil {
		w.near.add(local, mostSeen)
	}
}

// look finds the change near a local time, and the stretch that this holds for.
func (w *wallEvidence) look(local int64) {
	_, offset := time.Unix(local, 0).In(w.zone).Zone()
	at := time.Unix(local-int64(offset), 0).In(w.zone)
	start, end := at.ZoneBounds()
	w.near, w.quietFrom, w.quietTo = nil, local-secondsPerDay, local+secondsPerDay
	const around = 6 * secondsPerHour
	for _, turn := range []time.Time{start, end} {
		if turn.IsZero() {
			continue
		}
		c := w.changeAt(turn)
		switch {
		case c == nil:
		case local >= c.from-around && local < c.to+around:
			w.near, w.quietFrom, w.quietTo = c, c.from-around, c.to+around
			return
		case local < c.from:
			w.quietTo = min(w.quietTo, c.from-around)
		default:
			w.quietFrom = max(w.quietFrom, c.to+around)
		}
	}
}

func (w *wallEvidence) changeAt(turn time.Time) *change {
	at := turn.Unix()
	if known := w.changes[at]; known != nil || len(w.changes) >= mostChanges {
		return known
	}
	_, before := time.Unix(at-1, 0).In(w.zone).Zone()
	_, after := turn.In(w.zone).Zone()
	c := &change{from: at + int64(before), to: at + int64(after), forward: after > before}
	if !c.forward {
		c.from, c.to = c.to, c.from
	}
	// A change of the zone's standard time by days (the date line) or of nothing
	// but its name says nothing.
	if c.from == c.to || c.to-c.from > nearChange {
		c = nil
	} else {
		c.seen = map[int64]bool{}
	}
	w.changes[at] = c
	return c
}

// against reports whether a row stands at a time that the clock on the wall
// leaves out.
func (w *wallEvidence) against() bool {
	for _, c := range w.changes {
		if c != nil && c.forward && c.inside {
			return true
		}
	}
	return false
}

// judge says whether the file runs on the clock on the wall. unsure is true
// when it skips an hour as that clock does and does not double one where it
// should: then only a person knows.
func (w *wallEvidence) judge() (wall, unsure bool) {
	skips, doubles, against, singles := 0, 0, 0, 0
	for _, c := range w.changes {
		switch {
		case c == nil || c.last == 0 || c.next == 0:
		case c.forward && c.inside:
			against++
		case c.forward && c.skips():
			skips++
		case !c.forward && c.again && !c.againBefore:
			doubles++
		case !c.forward && c.single():
			singles++
		}
	}
	switch {
	case against > 0 || skips+doubles == 0:
		return false, false
	case singles > 0:
		return false, true
	}
	return true, false
}
