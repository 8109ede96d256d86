package intake

import (
	"strings"
	"testing"

	"swardbook/planner"
)

// Every name of the table is understood in each way of writing it, and none
// has two meanings.
func TestColumnNames(t *testing.T) {
	t.Parallel()
	seen := map[string]role{}
	for _, known := range columnNames {
		for _, name := range known.names {
			if other, ok := seen[name]; ok {
				t.Errorf("%q is a %s and a %s", name, other.word(), known.word)
			}
			seen[name] = known.role
			for _, written := range []string{name, strings.ToUpper(name), " " + strings.ReplaceAll(name, " ", "_") + " "} {
				if got := readColumn(3, []byte(written)); got.role != known.role || got.units != "" || got.index != 3 {
					t.Errorf("%q is read as %+v", written, got)
				}
			}
			if known.role == timeRole || known.role == hourRole {
				continue
			}
			for ending, units := range map[string]planner.Units{
				"_c": "c", " (°C)": "c", " [degC]": "c", "_celsius": "c", " deg C": "c", " \xb0C": "c",
				"_f": "f", " (°F)": "f", " (ºF)": "f", "_degF": "f", " Fahrenheit": "f", " degrees F": "f",
			} {
				if got := readColumn(0, []byte(name+ending)); got.role != known.role || got.units != units {
					t.Errorf("%q is read as %+v, want %s in %q", name+ending, got, known.word, units)
				}
			}
		}
	}
	for _, name := range []string{"", "dew_point_c", "temp_flag", "soil temp", "time_c", "wind", "°C", "c", "temp min flag"} {
		if got := readColumn(0, []byte(name)); got.role != noRole {
			t.Errorf("%q is read as a %s", name, got.role.word())
		}
	}
}
