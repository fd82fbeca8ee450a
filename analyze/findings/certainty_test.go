package findings

import (
	"math"
	"testing"
)

func TestCertaintyNeverFallsAsTheEvidenceGrows(t *testing.T) {
	line := counted()
	if first, last := line[0], line[len(line)-1]; first != [2]float64{0, 0} || last[0] != 1 || last[1] > 1 {
		t.Errorf("the line goes from %v to %v", first, last)
	}
	before := -1.0
	for k := range 1001 {
		c := calibrated(float64(k) / 1000)
		if math.IsNaN(c) || c < before {
			t.Fatalf("%g at %g after %g", c, float64(k)/1000, before)
		}
		before = c
	}
	for _, p := range line {
		if got := calibrated(p[0]); math.Abs(got-p[1]) > 1e-12 {
			t.Errorf("%g at %g, the line has %g", got, p[0], p[1])
		}
	}
}

func TestWordsHaveTheirBounds(t *testing.T) {
	for _, c := range []struct {
		at   float64
		word Word
	}{{0.95, High}, {0.949, Likely}, {0.85, Likely}, {0.849, Possible}} {
		if got := wordOf(c.at); got != c.word {
			t.Errorf("%g is %q", c.at, got)
		}
	}
}
