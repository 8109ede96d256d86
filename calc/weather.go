package calc

import (
	"fmt"
	"math"
)

// HeatIndexF returns the heat index of the US National Weather Service, °F, for
// an air temperature in °F and a relative humidity in percent. It is for shade
// and light wind; full sun adds up to 15 °F.
//
//	simple = (T + 61 + 1.2 (T − 68) + 0.094 R) / 2, averaged with T
//
// From 80 °F of that on, the regression takes over:
//
//	−42.379 + 2.04901523 T + 10.14333127 R − 0.22475541 T R − 0.00683783 T²
//	− 0.05481717 R² + 0.00122874 T² R + 0.00085282 T R² − 0.00000199 T² R²
//
// less ((13 − R)/4) √((17 − |T − 95|)/17) for R below 13 and T from 80 to 112,
// plus ((R − 85)/10) ((87 − T)/5) for R above 85 and T from 80 to 87.
//
// A humidity outside 0 to 100 is ErrHumidity, a value that is no number
// ErrNotFinite; a temperature outside −50 to 140 °F, far outside the weather it
// was fitted to, ErrNotFinite too. Source: US National Weather Service, heat index equation page
// (regression of Rothfusz 1990).
func HeatIndexF(temperatureF, humidityPercent float64) (float64, error) {
	t, r := temperatureF, humidityPercent
	if err := requireFinite("temperature", t); err != nil {
		return 0, fmt.Errorf("heat index: %w", err)
	}
	if t < -50 || t > 140 {
		return 0, fmt.Errorf("heat index: %g °F is no air temperature: %w", t, ErrNotFinite)
	}
	if !(r >= 0 && r <= 100) {
		return 0, fmt.Errorf("heat index: a relative humidity of %g %% is not between 0 and 100: %w", r, ErrHumidity)
	}
	simple := (t + 61 + 1.2*(t-68) + 0.094*r) / 2
	if averaged := (simple + t) / 2; averaged < 80 {
		return averaged, nil
	}
	index := -42.379 + 2.04901523*t + 10.14333127*r - 0.22475541*t*r - 0.00683783*t*t -
		0.05481717*r*r + 0.00122874*t*t*r + 0.00085282*t*r*r - 0.00000199*t*t*r*r
	switch {
	case r < 13 && t >= 80 && t <= 112:
		index -= (13 - r) / 4 * math.Sqrt((17-math.Abs(t-95))/17)
	case r > 85 && t >= 80 && t <= 87:
		index += (r - 85) / 10 * (87 - t) / 5
	}
	return index, nil
}

// HeatBand is a class of the heat index.
type HeatBand string

// The classes of the US National Weather Service (second-hand: 80-90, 90-103,
// 103-124, from 125 °F).
const (
	HeatNone            HeatBand = ""
	HeatCaution         HeatBand = "caution"
	HeatExtremeCaution  HeatBand = "extreme caution"
	HeatDanger          HeatBand = "danger"
	HeatExtremeDanger   HeatBand = "extreme danger"
	heatCautionF                 = 80
	heatExtremeCautionF          = 90
	heatDangerF                  = 103
	heatExtremeDangerF           = 125
)

// HeatBandOf returns the class of a heat index in °F; none below 80 °F, and for
// a value that is no number.
func HeatBandOf(heatIndexF float64) HeatBand {
	switch {
	case heatIndexF >= heatExtremeDangerF:
		return HeatExtremeDanger
	case heatIndexF >= heatDangerF:
		return HeatDanger
	case heatIndexF >= heatExtremeCautionF:
		return HeatExtremeCaution
	case heatIndexF >= heatCautionF:
		return HeatCaution
	}
	return HeatNone
}

// HoursBelow returns for how many hours of a day the temperature is below the
// threshold, 0 to 24, when it swings from the low to the high and back as a
// sine (Baskerville & Emin 1969). High, low and threshold are in °C; a value
// that is no number is ErrNotFinite, a high below the low ErrHighBelowLow.
//
//	24 (1 − F(threshold))
//
// where F is the share of the day above the threshold.
func HoursBelow(highC, lowC, thresholdC float64) (float64, error) {
	if err := requireExtremes(highC, lowC); err != nil {
		return 0, fmt.Errorf("hours below: %w", err)
	}
	if err := requireFinite("threshold", thresholdC); err != nil {
		return 0, fmt.Errorf("hours below: %w", err)
	}
	if highC == lowC && thresholdC == lowC {
		return 0, nil // not below, only at it
	}
	_, share := sineAbove(highC, lowC, thresholdC)
	return 24 * (1 - share), nil
}
