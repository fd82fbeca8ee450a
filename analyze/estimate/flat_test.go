package estimate

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestFlatFactorHoldsNineteenInTwenty(t *testing.T) {
	// Ends: 1.96 of the normal and 0.95 sqrt 3 of the rectangular distribution
	// (JCGM 100 G.1.2 table G.1 and 4.3.7).
	if k := FlatFactor95(0); math.Abs(k-1.959964) > 1e-6 {
		t.Errorf("no share: %v", k)
	}
	if k := FlatFactor95(1); math.Abs(k-1.645448) > 1e-6 {
		t.Errorf("all of it: %v", k)
	}
	r := rand.New(rand.NewPCG(7, 1))
	const n = 200000
	for _, share := range []float64{0.3, 0.6, 0.8, 0.9, 0.97, 0.995} {
		k, inside := FlatFactor95(share), 0
		for range n {
			if math.Abs(DrawRectangular(r, 0, share)+math.Sqrt(1-share*share)*r.NormFloat64()) <= k {
				inside++
			}
		}
		if got := float64(inside) / n; math.Abs(got-0.95) > 4*math.Sqrt(0.95*0.05/n) {
			t.Errorf("share %v: %v within %v", share, got, k)
		}
	}
}

func TestFlatPartNarrowsTheIntervalAndNeverBelowScatter(t *testing.T) {
	e := Estimate{System: 1, Flat: 1, DoF: 2, Method: "m"}
	if lo, hi := e.Interval95(); math.Abs(hi-1.645448) > 1e-6 || lo != -hi {
		t.Errorf("%v to %v", lo, hi)
	}
	e.Random = 0.5
	_, wide := e.Interval95()
	if _, scatter := e.RandomInterval95(); wide < scatter {
		t.Errorf("%v, below scatter's own %v", wide, scatter)
	}
	if s := e.Scale(-2); s.Flat != 2 {
		t.Errorf("%+v", s)
	}
}
