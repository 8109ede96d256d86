package planner

import "math"

// Part is a named part of a surface that is at times done apart from the rest,
// such as the front nine.
type Part struct {
	Name  string  `json:"name"`
	Share float64 `json:"share"` // of the surface's area, 0 to 1
}

// ShareOf is the part's share of the area; 1 for the whole surface (no name).
func (s Surface) ShareOf(part string) float64 {
	for _, known := range s.Parts {
		if NameKey(known.Name) == NameKey(part) {
			return known.Share
		}
	}
	return 1
}

func (s Surface) checkParts() error {
	if len(s.Parts) == 0 {
		return nil
	}
	total := 0.0
	seen := map[string]bool{}
	for _, part := range s.Parts {
		if err := CheckName(part.Name); err != nil {
			return err
		}
		if !(part.Share > 0 && part.Share <= 1) || seen[NameKey(part.Name)] {
			return Problemf(Invalid, "the part %q cannot be used", part.Name).WithHint("Each part has a name of its own and a share above 0.")
		}
		seen[NameKey(part.Name)] = true
		total += part.Share
	}
	if math.Abs(total-1) > 1e-9 {
		return Problemf(Invalid, "the parts of %s make %s of it", s.Name, number(total)).WithHint("The shares of all parts together make 1.")
	}
	return nil
}

// standing passes of one work, by day.
type donePass struct {
	Day    Day // the count starts the day after: the day it was done, or watered in
	Part   string
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
// of its parts' newest passes. Parts never done are left out, and named when
// others were done since.
func wholeSince(surface Surface, done []donePass) (since Day, behind []string, ok bool) {
	parts := surface.Parts
	if len(parts) == 0 {
		parts = []Part{{}}
	}
	newest := make([]Day, len(parts))
	latest := DayMin
	for i, part := range parts {
		newest[i] = DayMin
		for _, pass := range done {
			if pass.Part == "" || NameKey(pass.Part) == NameKey(part.Name) {
				newest[i] = max(newest[i], pass.Day)
			}
		}
		latest = max(latest, newest[i])
		if newest[i] > DayMin && (!ok || newest[i] < since) {
			since, ok = newest[i], true
		}
	}
	for i, part := range parts {
		if newest[i] < latest {
			behind = append(behind, part.Name)
		}
	}
	return since, behind, ok
}
