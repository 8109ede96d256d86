package planner

import (
	"math"
	"slices"
)

// PartID names a part of one surface for good; 0 stands for the whole surface.
type PartID int

// Part is a named part of a surface that is at times done apart from the rest,
// such as the front nine. A part that is dropped stays, for the log's sake.
type Part struct {
	ID      PartID  `json:"id"`
	Name    string  `json:"name"`
	Share   float64 `json:"share"` // of the surface's area, 0 to 1
	Dropped bool    `json:"dropped,omitempty"`
}

// ActiveParts are the parts that were not dropped; none when the surface is
// done as a whole.
func (s Surface) ActiveParts() []Part {
	return filter(s.Parts, func(part Part) bool { return !part.Dropped })
}

// ShareOf is the part's share of the area; 1 for the whole surface.
func (s Surface) ShareOf(id PartID) float64 {
	for _, part := range s.Parts {
		if part.ID == id {
			return part.Share
		}
	}
	return 1
}

// shareOf is the share of the surface's area that the pass went over: as it was
// when it was logged, for the lead may cut the parts anew.
func (p Pass) shareOf(surface Surface) float64 {
	if p.Share > 0 {
		return p.Share
	}
	return surface.ShareOf(p.Part)
}

// PartName is the part's name; "" for the whole surface.
func (s Surface) PartName(id PartID) string {
	for _, part := range s.Parts {
		if part.ID == id {
			return part.Name
		}
	}
	return ""
}

// WithParts returns the surface done in the parts given, by name and share: a
// part that it has or had keeps its id, another gets a new one, and those not
// given are dropped. No parts make it a surface done as a whole.
func (s Surface) WithParts(parts []Part) Surface {
	kept := slices.Clone(s.Parts)
	newest := PartID(0)
	for i := range kept {
		kept[i].Dropped = true
		newest = max(newest, kept[i].ID)
	}
	for _, part := range parts {
		at := slices.IndexFunc(kept, func(known Part) bool { return NameKey(known.Name) == NameKey(part.Name) })
		if at < 0 {
			newest++
			kept, at = append(kept, Part{ID: newest}), len(kept)
		}
		kept[at] = Part{ID: kept[at].ID, Name: part.Name, Share: part.Share}
	}
	s.Parts = kept
	return s
}

func (s Surface) checkParts() error {
	total := 0.0
	seen := map[string]bool{}
	ids := map[PartID]bool{}
	for _, part := range s.Parts {
		if err := CheckName(part.Name); err != nil {
			return err
		}
		if !(part.Share > 0 && part.Share <= 1) || seen[NameKey(part.Name)] || part.ID < 1 || ids[part.ID] {
			return Problemf(Invalid, "the part %q cannot be used", part.Name).WithHint("Each part has a name of its own and a share above 0.")
		}
		seen[NameKey(part.Name)], ids[part.ID] = true, true
		if !part.Dropped {
			total += part.Share
		}
	}
	if len(s.ActiveParts()) > 0 && math.Abs(total-1) > 1e-9 {
		return Problemf(Invalid, "the parts of %s make %s of it", s.Name, number(total)).WithHint("The shares of all parts together make 1.")
	}
	return nil
}

// donePass is one pass of a work that counts.
type donePass struct {
	Day    Day // the count starts the day after: the day it was done, or watered in
	Part   PartID
	Result Result
}

// passesOf lists the passes of the work that count: not lost, and, but for a
// nitrogen balance, since it was last on.
func (p Plan) passesOf(work Work) []donePass {
	settings := work.Settings.On(p.AsOf)
	since := work.onSince(p.AsOf)
	var done []donePass
	for _, entry := range p.Log {
		pass, ok := entry.Of(work.ID)
		if !ok || entry.Result == Lost || entry.Day < since {
			continue
		}
		done = append(done, donePass{countsFrom(settings, entry), pass.Part, entry.Result})
	}
	return done
}

// countsFrom is the day after which the entry's passes count: that on which it
// was done, or watered in where the work waits for that.
func countsFrom(settings WorkSettings, entry Entry) Day {
	if settings.WateredIn {
		return max(entry.Day, entry.Watered)
	}
	return entry.Day
}

// onSince is the first day since which the work is on without a rest: the start
// of its season, or the day on which the lead ended its rest.
func (w Work) onSince(asOf Day) Day {
	since := w.Settings.On(asOf).Season.Start(asOf)
	for i := 1; i < len(w.Settings); i++ {
		row := w.Settings[i]
		replaced := i+1 < len(w.Settings) && w.Settings[i+1].Day == row.Day
		if row.Day <= asOf && !replaced && !row.Value.Season.Resting && w.Settings.On(row.Day-1).Season.Resting {
			since = max(since, row.Day)
		}
	}
	return since
}

// rounds is how far the passes of a work have gone over a surface.
type rounds struct {
	// Since is the day from which the whole surface counts: the earliest of its
	// parts' newest passes, parts never done left out.
	Since Day
	// Last is the newest pass over any of what is to be done next: the parts
	// behind, or else the whole.
	Last Day
	// Behind names the parts that are still to be done of a round that others
	// began: a round ends with the last part, or with a pass over the whole.
	Behind []string
}

// roundsOf goes through the passes; ok is false when there is none. Passes of
// parts that were dropped do not count.
func roundsOf(surface Surface, done []donePass) (r rounds, ok bool) {
	parts := surface.ActiveParts()
	if len(parts) == 0 {
		parts = []Part{{}}
	}
	newest, left := map[PartID]Day{}, []Part(nil)
	for _, pass := range done {
		if pass.Part != 0 && !slices.ContainsFunc(parts, func(part Part) bool { return part.ID == pass.Part }) {
			continue
		}
		if len(left) == 0 {
			left = parts
		}
		left = filter(left, func(part Part) bool { return pass.Part != 0 && pass.Part != part.ID })
		for _, part := range parts {
			if day, known := newest[part.ID]; (pass.Part == 0 || pass.Part == part.ID) && (!known || pass.Day > day) {
				newest[part.ID] = pass.Day
			}
		}
	}
	r.Last = DayMin
	for part, day := range newest {
		if !ok || day < r.Since {
			r.Since, ok = day, true
		}
		if len(left) == 0 || slices.ContainsFunc(left, func(one Part) bool { return one.ID == part }) {
			r.Last = max(r.Last, day)
		}
	}
	for _, part := range left {
		r.Behind = append(r.Behind, part.Name)
	}
	return r, ok
}

// PassBefore is the newest other entry, up to the entry's day, with a pass of the
// work over any of what the entry's goes over; lost ones are left out. ok is
// false when there is none.
func (p Plan) PassBefore(entry Entry, work WorkID) (before Entry, ok bool) {
	pass, _ := entry.Of(work)
	for _, other := range slices.Backward(p.Log) {
		its, has := other.Of(work)
		meets := its.Part == pass.Part || its.Part == 0 || pass.Part == 0
		if has && meets && other.ID != entry.ID && other.Day <= entry.Day && other.Result != Lost {
			return other, true
		}
	}
	return Entry{}, false
}
