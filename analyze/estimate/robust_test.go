package estimate

import (
	"math"
	"testing"
)

func TestMedianSlopeGivesPublishedLines(t *testing.T) {
	// Computed with an independent library; slopes are exact ratios. Data: see
	// testdata/SOURCES.md.
	for _, c := range []struct {
		file                           string
		slope, low, high, a, atMedians float64
	}{
		{"r-starscyg.csv", 1.7272727272727217, 0.4629629629629629, 3.0727272727272745, -2.623636363636339, -2.5345454545454302},
		{"r-phones.csv", 1.3875, 1.125, 5.1, -67.98125, -69.83125},
		{"r-cars.csv", 11.0 / 3, 2.9333333333333333, 4.5, -47.0 / 3, -19},
	} {
		d := columns(t, c.file)
		m, err := TheilSen(d[0], d[1])
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.file+" slope", m.Slope, c.slope, 1e-12)
		near(t, c.file+" low", m.Low, c.low, 1e-12)
		near(t, c.file+" high", m.High, c.high, 1e-12)
		near(t, c.file+" intercept", m.A, c.a, 1e-12)
		near(t, c.file+" intercept at the medians", m.AtMedians, c.atMedians, 1e-12)
	}
}

func TestRobustLinesGivePublishedFits(t *testing.T) {
	// R rlm (MASS), iterated to 1e-13. The book's printed Huber line of the
	// phones, -102.622 and 2.041, is that of a loose tolerance.
	for _, c := range []struct {
		name, file  string
		fit         func(x, y []float64) (RobustLine, error)
		a, b, scale float64 // scale 0: not given
	}{
		{"Huber", "r-phones.csv", FitHuber, -102.529638118, 2.03960046572, 9.00902830585},
		{"bisquare", "r-phones.csv", FitBisquare, -52.3025106822, 1.09804648483, 1.65545571377},
		{"Huber", "r-starscyg.csv", FitHuber, 6.86589452483, -0.428524770727, 0},
	} {
		d := columns(t, c.file)
		r, err := c.fit(d[0], d[1])
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.name+" "+c.file+" intercept", r.A, c.a, 1e-9)
		near(t, c.name+" "+c.file+" slope", r.B, c.b, 1e-9)
		if c.scale != 0 {
			near(t, c.name+" scale", r.Scale, c.scale, 1e-9)
		}
	}
}

func TestBisquareCountsThePhonesMiscoded(t *testing.T) {
	// Rousseeuw and Leroy (1987): 1964 to 1969 were recorded in another unit, 1970
	// in part, 1963 too: six or seven far points.
	d := columns(t, "r-phones.csv")
	r, err := FitBisquare(d[0], d[1])
	if err != nil {
		t.Fatal(err)
	}
	if n := r.Outliers(); n < 6 || n > 8 {
		t.Errorf("%d outliers", n)
	}
}

func TestRobustLinesPassThroughAnExactMajority(t *testing.T) {
	x, y := []float64{1, 2, 3, 4, 5, 6, 7}, []float64{3, 5, 7, 90, 11, 13, 15}
	for name, fit := range map[string]func(x, y []float64) (RobustLine, error){"Huber": FitHuber, "bisquare": FitBisquare} {
		r, err := fit(x, y)
		if err != nil || math.Abs(r.B-2) > 1e-6 || math.Abs(r.A-1) > 1e-6 || r.Outliers() != 1 {
			t.Errorf("%s: %+v, %v", name, r, err)
		}
	}
	if r, err := FitHuber(x, x); err != nil || r.B != 1 || r.Outliers() != 0 {
		t.Errorf("a line: %+v, %v", r, err)
	}
}

// All readings at one value, as a display shows them: the line is flat, and
// nothing is divided by what is not there.
func TestTheilSenOfAConstantWithTies(t *testing.T) {
	x, y := []float64{1, 1, 1, 2, 2, 2}, []float64{5, 5, 5, 5, 5, 5}
	m, err := TheilSen(x, y)
	if err != nil || m.Slope != 0 || m.Low != 0 || m.High != 0 || m.A != 5 {
		t.Errorf("%+v, %v", m, err)
	}
}
