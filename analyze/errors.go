package analyze

import (
	"errors"
	"fmt"
	"strconv"

	"tautramp/acquire/mill"
)

// Why there is no result, or no figure.
var (
	ErrTooFewPairs = errors.New("too few pairs of setting and extension")
	ErrNoCycle     = errors.New("no full rise and fall to fit")
	ErrNoZero      = errors.New("the extension of the slack band is not known")
)

// noZero says why a figure that needs the zero is unknown.
const noZero = "the stretch of the slack band is not known"

// OutOfRangeError is a figure asked for outside what was captured: by the second
// furthest ramp, or by the only one. No ramp's line is carried on by more than a
// trifle of its own range.
type OutOfRangeError struct {
	Want, Low, High float64 // SI
	What            string  // "band stress, rising" or "setting, falling"
	Direction       Direction
	Role            mill.Role
	Setting         mill.SetBy // what the tensioner is set by, where it is a setting
}

// Error is in SI units as they are displayed; report has it in the reader's.
func (e *OutOfRangeError) Error() string {
	unit := mill.SI.Unit(e.Role)
	show := func(si float64) string {
		if unit.SI == 0 {
			return strconv.FormatFloat(si, 'g', 4, 64)
		}
		return strconv.FormatFloat(unit.FromSI(si), 'f', 1, 64) + " " + unit.Name
	}
	return fmt.Sprintf("%s: %s lies outside the captured range, %s to %s: %s",
		e.What, show(e.Want), show(e.Low), show(e.High), e.Advice())
}

// Advice is what to do about it.
func (e *OutOfRangeError) Advice() string {
	if e.Want < e.Low {
		return "no straight line was captured so low; ask for more"
	}
	return "ramp far enough past it, never past the maker's limit"
}
