package report

import (
	"errors"
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

// Explain says an error of the analysis in the reader's units; an error without
// figures in its own words.
func Explain(err error, s mill.System) string {
	out, ok := errors.AsType[*analyze.OutOfRangeError](err)
	if !ok {
		return err.Error()
	}
	u := unitsFor(mill.Tensioner{SetBy: out.Setting}, s)
	in := u.setting
	if out.Role == mill.RoleStress {
		in = u.stress
	}
	want, low, high := in.show(out.Want), in.show(out.Low), in.show(out.High)
	largest := max(math.Abs(want), math.Abs(low), math.Abs(high))
	if !finite(largest) || largest == 0 {
		return err.Error()
	}
	show := func(x float64) string { return grouped(fixed(x, uncertaintyDecimals(largest)+2)) } // four digits of the largest
	return fmt.Sprintf("%s lies outside %s to %s, the range captured %s: %s",
		in.with(show(want)), show(low), in.with(show(high)), out.Direction, out.Advice())
}
