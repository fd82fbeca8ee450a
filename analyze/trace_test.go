package analyze

import (
	"math"
	"testing"

	"tautramp/acquire/pairing"
)

// TestAHoleInTheSettingIsBridged drops a second of a ramp of 1 SI/s, with a
// window far narrower: the smoothed setting goes on along the ramp.
func TestAHoleInTheSettingIsBridged(t *testing.T) {
	set := &pairing.Set{}
	for i := range 500 {
		at := float64(i) * 0.02
		if at > 4 && at < 5 {
			continue
		}
		set.Pairs = append(set.Pairs, pairing.Pair{T: at, Setting: at})
	}
	tr := newTrace(set, 0)
	tr.windowS = 0.03
	for _, at := range []float64{-1, 0, 3.99, 4.3, 4.5, 4.97, 5.1, 9.98, 12} {
		want := math.Min(9.98, math.Max(0, at))
		if got := tr.smooth(at); !(math.Abs(got-want) < 0.02) {
			t.Errorf("smooth(%g) = %g, want %g", at, got, want)
		}
	}
}
