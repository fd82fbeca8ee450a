package gauge

import (
	"errors"
	"fmt"

	"tautramp/acquire/mill"
)

// ErrKind is an instrument or a limit in another quantity than the test's: a
// length would be taken for a pressure.
var ErrKind = errors.New("of another quantity than the test")

// measure is a figure that a test compares with its readings.
type measure struct {
	what string
	of   mill.Quantity
}

// checkKinds refuses what was stated in another quantity than the plan's.
func checkKinds(t Test, l Limit) error {
	dim := t.Plan.Dim()
	for _, i := range []mill.Instrument{t.Instruments.Tested, t.Instruments.Reference} {
		for _, m := range measuresOf(i) {
			if d := m.of.Unit.Dim; d != "" && d != dim {
				return fmt.Errorf("%s: %w: its %s is %s, and the test is of %s", i.Name, ErrKind, m.what, m.of.Entered, dim)
			}
		}
	}
	if l.Dim != "" && l.Dim != dim {
		return fmt.Errorf("limit %s: %w: it is a %s, and the test is of %s", l.Name, ErrKind, l.Dim, dim)
	}
	return nil
}

func measuresOf(i mill.Instrument) []measure {
	all := []measure{
		{"limit", i.Limit.Quantity}, {"range_low", i.Low.Quantity}, {"range_high", i.High.Quantity}, {"division", i.Division.Quantity},
	}
	if i.Bench == nil {
		return all
	}
	for _, p := range i.Bench.Points {
		all = append(all, measure{"bench record", p.At.Quantity}, measure{"bench record", p.Rising.Quantity}, measure{"bench record", p.Uncertainty.Quantity})
	}
	return all
}
