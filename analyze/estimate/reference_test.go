package estimate

import (
	"bufio"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// columns reads a CSV file of testdata: remarks, one heading, numbers.
func columns(t *testing.T, file string) [][]float64 {
	t.Helper()
	f, err := os.Open(filepath.Join("testdata", file))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var cols [][]float64
	heading := true
	for s := bufio.NewScanner(f); s.Scan(); {
		if strings.HasPrefix(s.Text(), "#") {
			continue
		}
		if heading {
			heading = false
			continue
		}
		fields := strings.Split(s.Text(), ",")
		if cols == nil {
			cols = make([][]float64, len(fields))
		}
		for i, field := range fields {
			v, err := strconv.ParseFloat(field, 64)
			if err != nil {
				v = math.Inf(1) // the t table's last row
			}
			cols[i] = append(cols[i], v)
		}
	}
	return cols
}

// near fails unless got is want within a relative tolerance.
func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %.15g, want %.15g within %.0e", what, got, want, tolerance)
	}
}

func TestLineGivesNISTCertifiedNorris(t *testing.T) {
	// NIST StRD, Norris, certified values.
	d := columns(t, "norris.csv")
	l, err := FitLine(d[0], d[1])
	if err != nil {
		t.Fatal(err)
	}
	near(t, "intercept", l.A, -0.262323073774029, 1e-11)
	near(t, "slope", l.B, 1.00211681802045, 1e-11)
	near(t, "intercept's SD", math.Sqrt(l.VarA), 0.232818234301152, 1e-12)
	near(t, "slope's SD", math.Sqrt(l.VarB), 0.429796848199937e-03, 1e-12)
	near(t, "residual SD", l.ResidualSD, 0.884796396144373, 1e-12)
	// ASTM E111 coefficient of variation equals se(slope)/slope.
	near(t, "se/slope", math.Sqrt(l.VarB)/l.B, 4.28888968e-4, 1e-8)
	if l.DoF != 34 || l.N != 36 {
		t.Errorf("dof %v of %d points, want 34 of 36", l.DoF, l.N)
	}
}

func TestLineGivesGUMThermometer(t *testing.T) {
	// JCGM 100:2008 H.3; the digits beyond the printed ones by exact arithmetic.
	d := columns(t, "h3-thermometer.csv")
	for i := range d[0] {
		d[0][i] -= 20
	}
	l, err := FitLine(d[0], d[1])
	if err != nil {
		t.Fatal(err)
	}
	near(t, "y1", l.A, -0.17120379013135, 1e-12)
	near(t, "s(y1)", math.Sqrt(l.VarA), 0.00287759783515995, 1e-12)
	near(t, "y2", l.B, 0.00218269773988728, 1e-12)
	near(t, "s(y2)", math.Sqrt(l.VarB), 0.000667938773227832, 1e-12)
	near(t, "r", l.CovAB/math.Sqrt(l.VarA*l.VarB), -0.930429603093446, 1e-12)
	near(t, "s", l.ResidualSD, 0.00349756396350528, 1e-12)
	b30, u := l.At(10)
	near(t, "b(30)", b30, -0.149376812732477, 1e-12)
	near(t, "u(b(30))", u, 0.00413859575285495, 1e-12)
}

func TestWeightedLineGivesISO28037(t *testing.T) {
	// ISO/TS 28037:2010 clause 6.3, two examples; digits by exact arithmetic.
	for _, c := range []struct {
		file                       string
		a, ua, b, ub, cov, chi2    float64
		stdY, inverse, inverseStd  float64
		inverseDigits, forwardCase float64
	}{
		{"iso28037-wls1.csv", 1.866666666666667, 0.465474668125631, 1.757142857142857, 0.119522860933439, -0.05, 1.664761904761905,
			0.5, 4.91327913279133, 0.32203556012891, 1e-12, 1},
		// Only three decimals of the second inverse are printed.
		{"iso28037-wls2.csv", 0.885232067510549, 0.529708143508836, 2.05696202531646, 0.177892016741205, -0.0822784810126582, 4.13080168776,
			1.0, 4.674, 0.533, 1e-3, 0},
	} {
		d := columns(t, c.file)
		w := make([]float64, len(d[2]))
		for i, u := range d[2] {
			w[i] = 1 / (u * u)
		}
		l, err := FitWeighted(d[0], d[1], w)
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.file+" a", l.A, c.a, 1e-12)
		near(t, c.file+" u(a)", math.Sqrt(l.VarA), c.ua, 1e-12)
		near(t, c.file+" b", l.B, c.b, 1e-12)
		near(t, c.file+" u(b)", math.Sqrt(l.VarB), c.ub, 1e-12)
		near(t, c.file+" cov", l.CovAB, c.cov, 1e-12)
		near(t, c.file+" chi2", l.ResidualSD*l.ResidualSD*l.DoF, c.chi2, 1e-11)
		x, u := l.Inverse(10.5, c.stdY)
		near(t, c.file+" inverse", x, c.inverse, c.inverseDigits)
		near(t, c.file+" u(inverse)", u, c.inverseStd, c.inverseDigits)
		if c.forwardCase == 1 { // x = 3.5 known to 0.2
			y, std := l.At(3.5)
			near(t, c.file+" forward", y, 8.01666666666667, 1e-12)
			near(t, c.file+" u(forward)", math.Hypot(std, l.B*0.2), 0.406409531732455, 1e-12)
		}
	}
}

func TestInverseAndFiellerGivePublishedCalibrations(t *testing.T) {
	// Graybill and Iyer (1994) chapter 6, Massart et al. (1997) chapter 8,
	// DIN 32645: digits computed with R, which agree with the printed ones.
	type wanted struct{ x, std, lo, hi float64 }
	for _, c := range []struct {
		name, file string
		y          float64
		readings   float64 // new readings of y; 0: the mean response is asked for
		level      float64
		want       wanted // 0: not given
	}{
		{"arsenic, one reading", "inv-arsenic.csv", 3, 1, 0.90, wanted{2.93144906137946, 0.192933775087211, 2.60353727350338, 3.25865794092469}},
		{"arsenic, mean response", "inv-arsenic.csv", 3, 0, 0.90, wanted{2.93144906137946, 0, 2.87240117401438, 2.98979404041368}},
		{"crystal, mean response 8", "inv-crystal.csv", 8, 0, 0.95, wanted{15.8881952326901, 0, 14.6589587043499, 17.1596321188673}},
		{"crystal, mean response 5", "inv-crystal.csv", 5, 0, 0.90, wanted{9.92905788876276, 0.6658998, 8.65025910278277, 11.0478965164653}},
		{"crystal, one reading", "inv-crystal.csv", 5, 1, 0.95, wanted{9.92905788876276, 2.21169752300534, 0, 0}},
	} {
		d := columns(t, c.file)
		l, err := FitLine(d[0], d[1])
		if err != nil {
			t.Fatal(err)
		}
		stdY := 0.0
		if c.readings > 0 {
			stdY = l.ResidualSD / math.Sqrt(c.readings)
		}
		x, std := l.Inverse(c.y, stdY)
		near(t, c.name+" x", x, c.want.x, 1e-11)
		if c.want.std != 0 {
			near(t, c.name+" std", std, c.want.std, 1e-7)
		}
		lo, hi, ok := l.Fieller(c.y, stdY, Student(c.level, l.DoF))
		if !ok {
			t.Errorf("%s: no interval", c.name)
		}
		if c.want.lo != 0 {
			near(t, c.name+" low", lo, c.want.lo, 1e-11)
			near(t, c.name+" high", hi, c.want.hi, 1e-11)
		}
	}
}

func TestInverseHalfWidthsGiveMassartAndDIN(t *testing.T) {
	for _, c := range []struct {
		file        string
		y, readings float64
		level       float64
		x, half     float64
	}{
		{"inv-massart-ex1.csv", 15, 1, 0.95, 6.09381007304883, 4.90675126994947},
		{"inv-massart-ex1.csv", 90, 1, 0.95, 43.9398308342945, 4.90805306938865},
		{"inv-massart-ex1.csv", 90, 5, 0.95, 43.9398308342945, 3.16848925728194},
		{"inv-din32645.csv", 3500, 1, 0.99, math.NaN(), 0.0743426124132455},
	} {
		d := columns(t, c.file)
		l, err := FitLine(d[0], d[1])
		if err != nil {
			t.Fatal(err)
		}
		x, std := l.Inverse(c.y, l.ResidualSD/math.Sqrt(c.readings))
		if !math.IsNaN(c.x) {
			near(t, c.file, x, c.x, 1e-11)
		}
		near(t, c.file+" half-width", std*Student(c.level, l.DoF), c.half, 1e-9)
	}
}

func TestFiellerHasNoEndsWhereTheSlopeIsNotTold(t *testing.T) {
	l, err := FitLine([]float64{1, 2, 3, 4}, []float64{1, -1, 1.2, -0.9})
	if err != nil {
		t.Fatal(err)
	}
	if lo, hi, ok := l.Fieller(0.5, 0, Student95(l.DoF)); ok {
		t.Errorf("interval %v to %v from a line without a slope", lo, hi)
	}
}

func TestStickGivesBaconAndWatts(t *testing.T) {
	// The optimum is exact: the join lies between the points 0.01 and 0.11.
	// The standard error is the one that a published program prints.
	d := columns(t, "segmented-stagnant.csv")
	s, err := FitStick(d[0], d[1])
	if err != nil {
		t.Fatal(err)
	}
	near(t, "break", s.Break, 0.041105784592114773, 1e-11)
	near(t, "left intercept", s.AL, 0.54466107838695061, 1e-12)
	near(t, "left slope", s.BL, -0.42207681441403022, 1e-12)
	near(t, "right intercept", s.AR, 0.56926250943921148, 1e-12)
	near(t, "right slope", s.BR, -1.0205675450101347, 1e-12)
	near(t, "RSS", s.RSS, 0.0091401972320882054, 1e-12)
	near(t, "standard error", s.BreakStd, 0.0228348, 1e-5)
}

func TestMeanAndLag1GiveNISTCertified(t *testing.T) {
	// NIST StRD univariate, certified values; NumAcc4 catches one-pass sums.
	for _, c := range []struct {
		file           string
		mean, sd, lag1 float64
		tolerance      float64
	}{
		{"strd-michelso.csv", 299.852400000000, 0.0790105478190518, 0.535199668621283, 1e-12},
		{"strd-lew.csv", -177.435000000000, 277.332168044316, -0.307304800605679, 1e-12},
		{"strd-numacc4.csv", 10000000.2, 0.1, -0.999, 1e-8},
	} {
		y := columns(t, c.file)[0]
		mean, sd := Mean(y)
		near(t, c.file+" mean", mean, c.mean, 1e-14)
		near(t, c.file+" SD", sd, c.sd, c.tolerance)
		r, ok := autocorrelation(y)
		if !ok {
			t.Fatalf("%s: does not vary", c.file)
		}
		near(t, c.file+" lag 1", r(1), c.lag1, c.tolerance)
	}
}

func TestStudentGivesTheTable(t *testing.T) {
	d := columns(t, "t-quantiles.csv")
	for i, dof := range d[0] {
		for j, level := range []float64{0.6827, 0.90, 0.95, 0.9545, 0.99, 0.9973} {
			if got, want := Student(level, dof), d[j+1][i]; math.Abs(got/want-1) > 2e-10 {
				t.Errorf("t(%v, dof %v) = %.12g, want %.12g", level, dof, got, want)
			}
		}
	}
}

func TestBudgetGivesGUMEndGauge(t *testing.T) {
	// JCGM 100:2008 H.1, components in nm from unrounded inputs.
	parts := []Component{
		{25, 18}, {5.8, 24}, {3.9, 5}, {6.7, 8},
		{1e-6 / math.Sqrt(3) * 5.0e6, 50}, // sensitivities as printed: 5.0e6 nm K and 575 nm/K
		{0.05 / math.Sqrt(3) * 575, 2},
	}
	near(t, "u_c", RootSum(parts), 31.663767411138345, 1e-9)
	near(t, "dof", EffectiveDoF(parts), 16.752147509190177, 1e-9)
	near(t, "t99 at 16", Student(0.99, 16), 2.920781622425100, 1e-9)
	near(t, "dof of d", EffectiveDoF(parts[1:4]), 25.447250777362726, 1e-9)
	// JCGM 100:2008 G.4.1.
	rel := []Component{{0.25, 9}, {0.57, 4}, {0.82, 14}}
	near(t, "G.4.1 u_c", RootSum(rel), 1.0294658809304948, 1e-12)
	near(t, "G.4.1 dof", EffectiveDoF(rel), 18.998742314267954, 1e-12)
}
