package calc_test

import (
	"regexp"
	"slices"
	"strings"
	"testing"
	"unicode/utf8"

	"swardbook/calc"
)

// widest is the number of columns a help text has on a phone: no single word may
// be longer, or it could not be wrapped.
const widest = 34

func TestCatalogue(t *testing.T) {
	statuses := []calc.Status{
		calc.StatusPrinted, calc.StatusAbstract, calc.StatusSecondHand,
		calc.StatusComputed, calc.StatusMemory, calc.StatusCommonPractice,
	}
	plainID := regexp.MustCompile(`^[a-z0-9]+(-[a-z0-9]+)*$`)
	ids, titles := make(map[string]bool), make(map[string]bool)
	for _, f := range calc.Catalogue() {
		t.Run(f.ID, func(t *testing.T) {
			if !plainID.MatchString(f.ID) {
				t.Error("id is not lower case words joined by hyphens")
			}
			if ids[f.ID] || titles[f.Title] {
				t.Error("id or title used twice")
			}
			ids[f.ID], titles[f.Title] = true, true
			if f.Title == "" || f.Words == "" || f.Source == "" {
				t.Errorf("something is empty: %+v", f)
			}
			if !slices.Contains(statuses, f.Status) {
				t.Errorf("status %q", f.Status)
			}
			for _, text := range []string{f.Title, f.Words, f.Source} {
				if strings.ContainsAny(text, "\n\t") || strings.Contains(text, "  ") || text != strings.TrimSpace(text) {
					t.Errorf("%q has line breaks or stray blanks", text)
				}
			}
			if !strings.HasSuffix(f.Words, ".") {
				t.Error("words do not end in a full stop")
			}
			for _, word := range strings.Fields(f.Words + " " + f.Title) {
				if utf8.RuneCountInString(word) > widest {
					t.Errorf("%q is too long for a line", word)
				}
			}
		})
	}
}

// Every figure the package can compute has an entry.
func TestCatalogueIsComplete(t *testing.T) {
	want := []string{
		"hourly-mean", "midrange-mean", "bridged-gap",
		"growth-potential", "growth-potential-held", "growth-potential-hours",
		"growth-curve-cool", "growth-curve-warm", "growth-curve-cool-f", "growth-curve-warm-f",
		"nitrogen-use", "unit-temperature", "unit-degree-days", "unit-kg-per-hectare",
		"unit-pounds-per-1000-square-feet", "first-passage", "nearest-rank", "heat-index", "hours-below",
	}
	for _, m := range calc.Methods() {
		want = append(want, "degree-days-"+string(m))
	}
	for _, cutoff := range calc.Cutoffs() {
		if cutoff != calc.CutoffNone {
			want = append(want, "cutoff-"+string(cutoff))
		}
	}
	var got []string
	for _, f := range calc.Catalogue() {
		got = append(got, f.ID)
	}
	for _, id := range want {
		if !slices.Contains(got, id) {
			t.Errorf("no entry %s", id)
		}
	}
	for _, id := range got {
		if !slices.Contains(want, id) {
			t.Errorf("entry %s computes nothing here", id)
		}
	}
}

func TestCatalogueIsTheCallersOwn(t *testing.T) {
	calc.Catalogue()[0].ID = "scribbled"
	if calc.Catalogue()[0].ID != "hourly-mean" {
		t.Error("a caller can change the catalogue")
	}
}

// Numbers said in words are the numbers in code.
func TestCatalogueWordsMatchTheCode(t *testing.T) {
	words := make(map[string]string)
	for _, f := range calc.Catalogue() {
		words[f.ID] = f.Words
	}
	for id, parts := range map[string][]string{
		"growth-curve-cool":                {short(calc.CoolSeason().OptimumC), short(calc.CoolSeason().WidthC)},
		"growth-curve-warm":                {short(calc.WarmSeason().OptimumC), short(calc.WarmSeason().WidthC)},
		"growth-curve-cool-f":              {"68 °F", "10 °F", short(calc.CoolSeasonF().OptimumC), short(calc.CoolSeasonF().WidthC)},
		"growth-curve-warm-f":              {"88 °F", "12 °F", short(calc.WarmSeasonF().OptimumC), short(calc.WarmSeasonF().WidthC)},
		"growth-potential":                 {short(100*must(calc.CoolSeason().Potential(14.5))) + " %"},
		"unit-pounds-per-1000-square-feet": {"453.59237", "92.90304", "4.88243"},
	} {
		for _, part := range parts {
			if !strings.Contains(words[id], part) {
				t.Errorf("%s does not say %q: %s", id, part, words[id])
			}
		}
	}
}
