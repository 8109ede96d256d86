package planner

import "fmt"

// SeasonYear is a season total of one year, through the same day of the year.
type SeasonYear struct {
	Start, End Day // End is the first day not counted
	Bases      []TotalFacts
}

// Season is a season total beside those of past years.
type Season struct {
	State TotalState
	Past  []SeasonYear // newest first
}

// mostPastYears bounds the past years a season is shown beside.
const mostPastYears = 10

// CompareSeason counts a total of the plan through yesterday, and through the
// same month and day of each past year of the record. Years of which more than
// a tenth of the days are missing are left out.
func CompareSeason(plan Plan, total Total) (Season, error) {
	state, err := plan.evaluateTotal(total)
	if err != nil {
		return Season{}, err
	}
	season := Season{State: state}
	first, ok := plan.Record.First()
	if !ok {
		return season, nil
	}
	measure, err := state.Settings.measure()
	if err != nil {
		return Season{}, err
	}
	yesterday := plan.AsOf - 1
	for ago := 1; ago <= mostPastYears; ago++ {
		year := SeasonYear{
			Start: state.Settings.Start.In(state.Start.Year() - ago),
			End:   yesterday.InYear(yesterday.Year()-ago) + 1,
		}
		if year.End <= first {
			break
		}
		for _, basis := range measure.Bases() {
			past := counter{plan: plan, measure: measure, basis: basis}.past(year.Start, year.End)
			year.Bases = append(year.Bases, TotalFacts{basis, past.sum})
		}
		if sum := year.Bases[0].Sum; 10*sum.Missing <= sum.Days {
			season.Past = append(season.Past, year)
		}
	}
	return season, nil
}

// Figures lists the season so far and each past year.
func (s Season) Figures() Figures {
	f := s.State.figures()
	for _, year := range s.Past {
		for _, facts := range year.Bases {
			f = append(f, Figure{
				Key:   fmt.Sprintf("season.%s.%d.%s", NameKey(s.State.Total.Name), year.Start.Year(), facts.Basis),
				Value: facts.Sum.Total, Unit: s.State.Unit, Basis: facts.Basis, Notes: facts.Sum.Notes(),
			})
		}
	}
	return f
}
