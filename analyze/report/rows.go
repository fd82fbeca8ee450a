package report

import (
	"errors"
	"math"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// maxRows is the most rows of the round-setting table: what fits on the sheet.
const maxRows = 12

// roundRows is the table of both branches at round settings.
type roundRows struct {
	Why  string // why there are none
	Rows []roundRow
}

// roundRow is one round setting; a side outside its captured range is unknown.
type roundRow struct {
	SettingSI         float64
	Setting           string // in the display unit
	Rising, Falling   figure
	risingE, fallingE estimate.Estimate
}

// rowsOf asks the analysis for the stress at round steps of the display unit
// over the captured range.
func rowsOf(r *analyze.Result, u units) roundRows {
	low := u.setting.show(math.Min(r.Rising.LowSI, r.Falling.LowSI))
	high := u.setting.show(math.Max(r.Rising.HighSI, r.Falling.HighSI))
	if !finite(low) || !finite(high) || high <= low {
		return roundRows{Why: "no range of the setting was captured"}
	}
	var table roundRows
	step, decimals := roundStep(high-low, maxRows)
	for n := math.Ceil(low / step); n*step <= high; n++ {
		setting := n * step
		row := roundRow{SettingSI: setting * u.setting.factor, Setting: grouped(fixed(setting, decimals))}
		row.risingE = stressAt(r, analyze.Rising, row.SettingSI)
		row.fallingE = stressAt(r, analyze.Falling, row.SettingSI)
		row.Rising = figureOf(row.risingE, u.stress)
		row.Falling = figureOf(row.fallingE, u.stress)
		table.Rows = append(table.Rows, row)
	}
	return table.orWhy()
}

// orWhy drops a table that knows nothing in favour of the reason.
func (t roundRows) orWhy() roundRows {
	why := "no round setting lies within the captured range"
	for _, row := range t.Rows {
		if row.Rising.Why == "" || row.Falling.Why == "" {
			return t
		}
		why = row.Rising.Why
		if why == outsideRange {
			why = row.Falling.Why
		}
	}
	return roundRows{Why: why}
}

// roundStep is the smallest step of 1, 2 or 5 times a power of ten that gives
// at most so many rows over a span, and the decimals that it needs.
func roundStep(span float64, rows int) (step float64, decimals int) {
	exponent := int(math.Floor(math.Log10(span / float64(rows))))
	for {
		for _, m := range []float64{1, 2, 5} {
			step = m * math.Pow10(exponent)
			if exponent < 0 { // a division is exact where the step is not
				step = m / math.Pow10(-exponent)
			}
			if math.Floor(span/step)+1 <= float64(rows) {
				return step, max(0, -exponent)
			}
		}
		exponent++
	}
}

// stressAt is the analysis' own stress at a setting; what it refuses becomes
// unknown with the reason.
func stressAt(r *analyze.Result, d analyze.Direction, settingSI float64) estimate.Estimate {
	e, err := r.StressAt(d, settingSI)
	if _, outside := errors.AsType[*analyze.OutOfRangeError](err); outside {
		return estimate.Unknown(outsideRange)
	}
	if err != nil {
		return estimate.Unknown(err.Error())
	}
	return e
}

const outsideRange = "outside the captured range"
