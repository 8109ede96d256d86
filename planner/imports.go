package planner

import (
	"context"
	"fmt"
	"io"
	"math"
	"time"
)

// ImportID names an import for good.
type ImportID int64

// Import is a station file that was read into the record.
type Import struct {
	ID        ImportID
	Station   StationID
	FileName  string
	At        time.Time
	By        string
	New       int
	Changed   int
	Same      int
	Refused   int
	Withdrawn bool
}

// Withdrawal is what taking an import back did, or would do.
type Withdrawal struct {
	Import   Import
	Gone     int // values that left the record
	Restored int // values that came back
	Kept     int // values that stay, as a later import gave them too
	// Moved are the days whose high, low or mean is another one now, in order.
	Moved []MovedDay
}

// MovedDay is a day before and after.
type MovedDay struct{ Before, After DayFacts }

// movedC is how much a value must differ to count as moved, in °C: less is the
// rounding of sums.
const movedC = 1e-9

// Moved reports whether a day's high, low or 24-hour mean differs between the
// two, or is known in one alone.
func Moved(before, after DayFacts) bool {
	differ := func(a, b float64) bool { return math.Abs(a-b) > movedC }
	return before.HasExtremes != after.HasExtremes || before.HasHourly != after.HasHourly ||
		before.HasExtremes && (differ(before.HighC, after.HighC) || differ(before.LowC, after.LowC)) ||
		before.HasHourly && differ(before.HourlyC, after.HourlyC)
}

// Imports returns the newest imports of the site, newest first.
func (b *Book) Imports(ctx context.Context, site SiteID, limit int) ([]Import, error) {
	imports, err := b.importer.Imports(ctx, site, limit)
	if err != nil {
		return nil, fmt.Errorf("list the imports: %w", err)
	}
	return imports, nil
}

// mostImports bounds how far back an import is looked for by its site.
const mostImports = 10_000

// Withdraw takes an import of the site back: the one with the id, or the newest
// that is not withdrawn when the id is 0. With dry nothing is changed.
func (b *Book) Withdraw(ctx context.Context, stamp Stamp, site SiteID, id ImportID, dry bool) (Withdrawal, error) {
	imports, err := b.Imports(ctx, site, mostImports)
	if err != nil {
		return Withdrawal{}, err
	}
	for _, one := range imports {
		if one.ID != id && (id != 0 || one.Withdrawn) {
			continue
		}
		if one.Withdrawn {
			return Withdrawal{}, Problemf(NotFound, "Import %d is withdrawn already.", one.ID).WithHint("/weather undo list:yes shows the imports.")
		}
		done, err := b.importer.Withdraw(ctx, stamp, one.ID, dry)
		if err != nil {
			return Withdrawal{}, fmt.Errorf("withdraw import %d: %w", one.ID, err)
		}
		return done, nil
	}
	if id != 0 {
		return Withdrawal{}, Problemf(NotFound, "There is no import %d.", id).WithHint("/weather undo list:yes shows the imports.")
	}
	return Withdrawal{}, Problemf(NotFound, "There is no import to withdraw.").WithHint("/weather file reads a station file.")
}

// Export writes all that the station recorded to a file that can be imported.
func (b *Book) Export(ctx context.Context, station StationID, to io.Writer) error {
	return b.importer.Export(ctx, station, to)
}
