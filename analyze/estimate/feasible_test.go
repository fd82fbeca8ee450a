package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// stairs is what a display of count 1 shows of a line without noise.
func stairs(r *rand.Rand, n int, a, b, step float64) (x, lo, hi []float64) {
	y := make([]float64, n)
	for i := range n {
		x = append(x, step*(float64(i)+r.Float64()))
		y[i] = math.Round(a + b*x[i])
	}
	lo, hi = Rounded(y, 1, 0)
	return x, lo, hi
}

func TestFeasibleLinesAreAllAndOnlyThoseThatPass(t *testing.T) {
	// Corners by brute force: a corner of the polygon is a line through two ends
	// that passes everywhere.
	for seed := range uint64(30) {
		r := rand.New(rand.NewPCG(seed, 11))
		x, lo, hi := stairs(r, 40, r.Float64(), 1, 0.12)
		f, ok, err := FeasibleLines(x, lo, hi)
		if err != nil || !ok {
			t.Fatalf("seed %d: %v %v", seed, ok, err)
		}
		passes := func(a, b float64) bool {
			for i := range x {
				if y := a + b*x[i]; y < lo[i]-1e-9 || y > hi[i]+1e-9 {
					return false
				}
			}
			return true
		}
		low, high := math.Inf(1), math.Inf(-1)
		for i := range x {
			for j := range i {
				for _, p := range []float64{lo[i], hi[i]} {
					for _, q := range []float64{lo[j], hi[j]} {
						b := (p - q) / (x[i] - x[j])
						if passes(p-b*x[i], b) {
							low, high = math.Min(low, b), math.Max(high, b)
						}
					}
				}
			}
		}
		gotLow, gotHigh := f.Slopes()
		near(t, "lowest slope", gotLow, low, 1e-9)
		near(t, "highest slope", gotHigh, high, 1e-9)
		for _, v := range f.Vertices {
			if !passes(v[0], v[1]) {
				t.Errorf("seed %d: the corner %v does not pass", seed, v)
			}
		}
		if !passes(f.Centre.A, f.Centre.B) {
			t.Errorf("seed %d: the centre does not pass", seed)
		}
	}
}

func TestFeasibleCentreIsTheMeanOfEvenlyDrawnLines(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 5))
	x, lo, hi := stairs(r, 60, 0.3, 1, 0.1)
	f, ok, err := FeasibleLines(x, lo, hi)
	if err != nil || !ok {
		t.Fatal(ok, err)
	}
	bLow, bHigh := f.Slopes()
	aLow, aHigh := f.At(0)
	var n, a, b, aa, ab, bb float64
	for range 300000 {
		u, v := aLow+(aHigh-aLow)*r.Float64(), bLow+(bHigh-bLow)*r.Float64()
		inside := true
		for i := range x {
			if y := u + v*x[i]; y < lo[i] || y > hi[i] {
				inside = false
				break
			}
		}
		if inside {
			u, v = u-f.Centre.A, v-f.Centre.B
			n, a, b, aa, ab, bb = n+1, a+u, b+v, aa+u*u, ab+u*v, bb+v*v
		}
	}
	if n < 1000 {
		t.Fatalf("%v lines drawn", n)
	}
	slack := 5 / math.Sqrt(n)
	if math.Abs(a/n) > slack*math.Sqrt(f.Centre.VarA) || math.Abs(b/n) > slack*math.Sqrt(f.Centre.VarB) {
		t.Errorf("mean off by %v, %v", a/n, b/n)
	}
	near(t, "VarA", f.Centre.VarA, aa/n, slack)
	near(t, "VarB", f.Centre.VarB, bb/n, slack)
	near(t, "CovAB", f.Centre.CovAB, ab/n, slack)
}

func TestFeasibleSaysWhenThereIsNone(t *testing.T) {
	x := []float64{0, 1, 2, 3}
	if _, ok, err := FeasibleLines(x, []float64{0, 5, 0, 5}, []float64{1, 6, 1, 6}); ok || err != nil {
		t.Errorf("a zigzag has a line: %v %v", ok, err)
	}
	if _, ok, err := FeasibleLines(x, []float64{0, 1, 2, 3}, []float64{0, 1, 2, 3}); ok || err != nil {
		t.Errorf("points on a line leave a set: %v %v", ok, err)
	}
	if _, _, err := FeasibleLines(x, []float64{0, 1, 2, 3}, []float64{0, 1, 1, 3}); !errors.Is(err, ErrBadValue) {
		t.Errorf("an interval backwards: %v", err)
	}
	if _, _, err := FeasibleLines([]float64{1, 1, 1}, []float64{0, 0, 0}, []float64{1, 1, 1}); !errors.Is(err, ErrNoSpread) {
		t.Errorf("one x: %v", err)
	}
}
