package analyze

import (
	"errors"
	"fmt"
)

// Why there is no result, or no figure.
var (
	ErrTooFewPairs = errors.New("too few pairs of setting and extension")
	ErrNoCycle     = errors.New("no full rise and fall to fit")
	ErrNoZero      = errors.New("the extension of the slack band is not known")
)

// noZero says why a figure that needs the zero is unknown.
const noZero = "the stretch of the slack band is not known"

// OutOfRangeError is a figure asked for outside what was captured; nothing is
// extrapolated.
type OutOfRangeError struct {
	Want, Low, High float64 // SI
	What            string  // "band stress, rising" or "setting, falling"
}

func (e *OutOfRangeError) Error() string {
	return fmt.Sprintf("%s of %.6g lies outside the captured range, %.6g to %.6g (SI): ramp far enough past it, never past the maker's limit",
		e.What, e.Want, e.Low, e.High)
}
