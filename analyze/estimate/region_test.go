package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

func TestSegmentsGiveBaconAndWatts(t *testing.T) {
	// Bacon and Watts (1971): one break; its place is exact, see the stick's test.
	d := columns(t, "segmented-stagnant.csv")
	s, err := FitSegments(d[0], d[1])
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Breaks) != 1 {
		t.Fatalf("%v", s)
	}
	near(t, "break", s.Breaks[0], 0.041105784592114773, 1e-11)
	near(t, "RSS", s.RSS, 0.0091401972320882054, 1e-12)
	near(t, "left slope", s.Lines[0][1], -0.42207681441403022, 1e-12)
}

func TestShiftGivesTheNile(t *testing.T) {
	// Flow of the Nile at Aswan (Cobb 1978): one shift, after 1898. Means and RSS
	// computed with R.
	d := columns(t, "r-nile.csv")
	s, err := LevelShift(d[1])
	if err != nil {
		t.Fatal(err)
	}
	if s.Index != 28 || d[0][s.Index-1] != 1898 {
		t.Errorf("index %d, last year %v", s.Index, d[0][s.Index-1])
	}
	near(t, "before", s.Before, 1097.75, 1e-12)
	near(t, "after", s.After, 849.972222222, 1e-11)
	near(t, "RSS", s.RSS, 1597457.19444, 1e-11)
	if _, err := LevelShift([]float64{1, 2, 3}); !errors.Is(err, ErrTooFew) {
		t.Error(err)
	}
	if _, err := LevelShift([]float64{1, 2, math.NaN(), 3}); !errors.Is(err, ErrBadValue) {
		t.Error(err)
	}
}

func TestRegionFindsTheToeVector(t *testing.T) {
	// Toe compensation of ASTM D638 Annex A1; the numbers are a vector of this
	// project: zero 0.5, slope 200.
	x := []float64{0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1, 1.2, 1.4, 1.6, 1.8, 2}
	y := []float64{0, 0, 1.37268202386e-81, 1.66666666667, 6.66666666667, 15, 26.6666666667, 41.6666666667, 60, 80, 100, 140, 180, 220, 260, 300}
	r, err := StraightWithin(x, y, 0)
	if err != nil || r.Shape != Straight || r.To != 2 {
		t.Fatalf("%+v, %v", r, err)
	}
	bx, by := between(x, y, r.From, r.To)
	l, err := FitLine(bx, by)
	if err != nil {
		t.Fatal(err)
	}
	zero, _ := l.InverseAt(0)
	near(t, "zero", zero, 0.5, 1e-3)
	near(t, "slope", l.B, 200, 1e-3)
}

// bentRamp is a line of slope 1 from 0 to 1 with a toe below, an end stop above
// and a sag, with noise.
func bentRamp(r *rand.Rand, n int, toe, stop, sag, noise, count float64) (x, y []float64) {
	for i := range n {
		u := float64(i) / float64(n-1)
		v := u + 4*sag*u*(u-1)
		if u < toe {
			v = toe/2 + u*u/toe/2
		}
		if u > stop {
			v = stop + 0.1*(u-stop)
		}
		v += noise * r.NormFloat64()
		if count > 0 {
			v = math.Round(v/count) * count
		}
		x, y = append(x, u), append(y, v)
	}
	return x, y
}

func TestRegionLeavesOutToeAndEndStop(t *testing.T) {
	for _, c := range []struct {
		name                    string
		toe, stop, noise, count float64
		fromLow, fromHigh       float64
		toLow, toHigh           float64
		lines                   int
	}{
		{"nothing to leave out", 0, 2, 0.002, 0, 0, 0, 1, 1, 1},
		{"toe", 0.2, 2, 0.002, 0, 0.1, 0.3, 1, 1, 2},
		{"end stop", 0, 0.9, 0.002, 0, 0, 0, 0.86, 0.92, 2},
		{"both", 0.2, 0.9, 0.002, 0, 0.1, 0.35, 0.86, 0.92, 3},
		{"both, on a display", 0.2, 0.9, 0.002, 0.005, 0.1, 0.35, 0.85, 0.92, 3},
	} {
		wrong := 0
		for seed := range uint64(trials(16)) {
			x, y := bentRamp(rand.New(rand.NewPCG(seed, 3)), 300, c.toe, c.stop, 0, c.noise, c.count)
			r, err := StraightWithin(x, y, 0)
			if err != nil {
				t.Fatal(err)
			}
			bx, by := between(x, y, r.From, r.To)
			l, err := FitLine(bx, by)
			if err != nil {
				t.Fatal(err)
			}
			if r.From < c.fromLow || r.From > c.fromHigh || r.To < c.toLow || r.To > c.toHigh || math.Abs(l.B-1) > 0.01 || r.Shape == Curved {
				wrong++
				t.Logf("%s: %v to %v of %v, slope %v, %s, bend %v", c.name, r.From, r.To, r.Found, l.B, r.Shape, r.Bend.Value)
			}
		}
		if wrong > 1 {
			t.Errorf("%s: wrong in %d", c.name, wrong)
		}
	}
}

func TestRegionTellsStraightFromCurved(t *testing.T) {
	for _, c := range []struct {
		name  string
		sag   float64
		noise float64
		n     int
		want  Shape
	}{
		{"straight", 0, 0.002, 300, Straight},
		{"gently curved", 0.015, 0.002, 300, Curved},
		{"a bend that does not matter", 0.002, 0.0005, 300, Straight},
		{"noise hides it", 0.005, 0.05, 30, Unsettled},
	} {
		got := map[Shape]int{}
		for seed := range uint64(20) {
			x, y := bentRamp(rand.New(rand.NewPCG(seed, 4)), c.n, 0, 2, c.sag, c.noise, 0)
			b, err := FitBend(x, y)
			if err != nil {
				t.Fatal(err)
			}
			got[shapeOf(b, worthTelling)]++
		}
		if got[c.want] < 18 {
			t.Errorf("%s: %v", c.name, got)
		}
	}
}

func TestBendIsTheParabolasSag(t *testing.T) {
	// 0.1 x^2 over a span of 4 leaves its chord by 0.1 (4/2)^2.
	x, y := []float64{0, 1, 2, 3, 4}, []float64{0, 0.5, 1.2, 2.1, 3.2}
	b, err := FitBend(x, y)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "bend", b.Value, 0.1*4/3.2, 1e-12)
	if _, err := FitBend(x[:4], y[:4]); !errors.Is(err, ErrTooFew) {
		t.Error(err)
	}
}

func TestShapeStartsUnsettled(t *testing.T) {
	if s := shapeOf(Estimate{}, worthTelling); s != Unsettled {
		t.Errorf("nothing known is %s", s)
	}
}
