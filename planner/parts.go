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
// nitrogen balance, of this season only.
func (p Plan) passesOf(work WorkID, settings WorkSettings) []donePass {
	since := settings.Season.Start(p.AsOf)
	var done []donePass
	for _, entry := range p.Log {
		pass, ok := entry.Of(work)
		if !ok || entry.Result == Lost || entry.Day < since {
			continue
		}
		day := entry.Day
		if settings.WateredIn && entry.Watered > day {
			day = entry.Watered
		}
		done = append(done, donePass{day, pass.Part, entry.Result})
	}
	return done
}

// wholeSince returns the day from which the whole surface counts: the earliest
// of its parts' newest passes. Parts never done are left out. behind names the
// parts that are still to be done of a round that others began: a round ends
// with the last part, or with a pass over the whole. Passes of parts that were
// dropped do not count.
func wholeSince(surface Surface, done []donePass) (since Day, behind []string, ok bool) {
	parts := surface.ActiveParts()
	if len(parts) == 0 {
		parts = []Part{{}}
	}
	newest, left := map[PartID]Day{}, []Part(nil)
	for _, pass := range done {
		if pass.Part != 0 && !slices.ContainsFunc(parts, func(part Part) bool { return part.ID == pass.Part }) {
			continue // of a part that was dropped
		}
		if len(left) == 0 {
			left = parts
		}
		left = filter(left, func(part Part) bool {
			return pass.Part != 0 && pass.Part != part.ID
		})
		for _, part := range parts {
			if pass.Part == 0 || pass.Part == part.ID {
				if day, known := newest[part.ID]; !known || pass.Day > day {
					newest[part.ID] = pass.Day
				}
			}
		}
	}
	for _, day := range newest {
		if !ok || day < since {
			since, ok = day, true
		}
	}
	for _, part := range left {
		behind = append(behind, part.Name)
	}
	return since, behind, ok
}
