package gauge

import (
	"encoding/json"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"tautramp/analyze/estimate"
)

// Textbook table, 11 points up and down, 0-10 kPa; read in a course notebook.
// The digits are exact rational arithmetic on it; the book prints slope 1.08 and
// intercept -0.85.
func TestATextbookPressureGauge(t *testing.T) {
	d := columns(t, "pressure-gauge-updown.csv")
	b := newBench(t, Transducer, d[0]...)
	for i, x := range d[0] {
		b.read(i, Up, 0, 0, x, d[1][i])
	}
	for i := len(d[0]) - 1; i >= 0; i-- {
		b.read(i, Down, 0, 0, d[0][i], d[2][i])
	}
	r := b.evaluate()
	const digits = 1e-12
	near(t, "slope", r.Lines.All.B, 1.08231818181818, 1e-14*1e3)
	near(t, "intercept", r.Lines.All.A, -0.847045454545455, digits)
	near(t, "residual SD", r.Lines.All.ResidualSD, 0.208058066632633, digits)
	near(t, "slope up", r.Lines.Rising.B, 1.08236363636364, 1e-11)
	near(t, "slope down", r.Lines.Falling.B, 1.08227272727273, 1e-11)
	// The course's variances have the divisor N; it prints 0.0002, 0.0063 and, of
	// output and input, 0.0394 and 0.0336.
	all := r.Lines.All
	byN := float64(all.N-2) / float64(all.N)
	near(t, "variance of the slope", all.VarB*byN, 0.00017887669045830196, 1e-11)
	near(t, "variance of the intercept", all.VarA*byN, 0.006260684166040569, 1e-11)
	near(t, "variance of the output", all.ResidualSD*all.ResidualSD*byN, 0.198375582924982*0.198375582924982, 1e-11)
	near(t, "variance of the input", all.ResidualSD*all.ResidualSD*byN/all.B/all.B, 0.03359437172876885, 1e-11)
	x, _ := r.Lines.All.InverseAt(4.32)
	near(t, "pressure at a reading of 4.32", x, 4.77405400865146, digits)
	near(t, "largest difference", r.UpDown.Value, 0.61, digits)
	near(t, "mean difference", r.MeanUpDown.Value, 0.356363636363636, digits)
	near(t, "hysteresis, share of the span", r.Flow.Hysteresis.Value, 0.061, digits)
	for i, want := range []float64{0.43, 0.21, 0.47, 0.39, 0.29, 0.21, 0.61, 0.3, 0.19, 0.42, 0.4} {
		near(t, "difference", r.Curves[0].At[i].UpDown.Value, want, 1e-11)
	}
	c := r.Conformity
	near(t, "terminal-based", c.Terminal.Deviation.Value, 0.139, 1e-11)
	near(t, "independent", c.Independent.Deviation.Value, 0.1015625, 1e-11)
	near(t, "independent slope", c.Independent.Line.B, 1.073125, digits)
	near(t, "independent intercept", c.Independent.Line.A, -0.8328125, digits)
	near(t, "zero-based", c.ZeroBased.Deviation.Value, 0.1225, 1e-11)
	near(t, "zero-based slope", c.ZeroBased.Line.B, 1.09875, digits)
	near(t, "about the least-squares line", c.LeastSquares.Deviation.Value, 0.114909090909091, 1e-11)
}

// Course notebook: largest hysteresis 0.2 mV, printed 4.08 % of the output range
// of 4.9 mV.
func TestATextbookHysteresis(t *testing.T) {
	d := columns(t, "textbook-5mV.csv")
	b := newBench(t, Transducer, d[0][:6]...)
	for i, x := range d[0] {
		way, index := Up, i
		if i >= 6 {
			way, index = Down, 11-i
		}
		b.read(index, way, 0, 0, x, d[1][i])
	}
	r := b.evaluate()
	near(t, "largest", math.Abs(r.UpDown.Value), 0.2, 1e-12)
	at := r.Curves[0].At
	out := at[5].ReferenceSI + at[5].Up.Value - at[0].ReferenceSI - at[0].Up.Value
	near(t, "of the output range, %", 100*math.Abs(r.UpDown.Value)/out, 4.08163265306, 1e-11)
	near(t, "of the input range", r.Flow.Hysteresis.Value, 0.04, 1e-12)
}

// NIST piston gages (EHRLICH.DAT): turning points by row, computed from the data
// with a dead band of 1.0.
func TestTheTurnsOfThePistonGages(t *testing.T) {
	d := columns(t, "piston-gage-updown.csv")
	for gage, want := range map[float64][]int{1: {1, 10, 18}, 2: {1, 6, 13, 20, 27, 39, 51}} {
		var p []float64
		var trace []Sample
		for i := range d[0] {
			if d[1][i] == gage {
				p = append(p, d[2][i])
				trace = append(trace, Sample{float64(i), d[2][i], d[2][i]})
			}
		}
		for k := 1; k+1 < len(want); k++ {
			from, to := want[k-1]-1, want[k+1]
			r, ok := FindReversal(trace[from:to], 1, 0.5)
			if !ok || math.Abs(r.AtSI-p[want[k]-1]) > 1e-3 || r.FromUp != (k%2 == 1) {
				t.Errorf("gage %v: turn %d at %+v %v, want %v", gage, k, r, ok, p[want[k]-1])
			}
			if r.InputSI > r.DoubtSI {
				t.Errorf("a dead band of %v +- %v where both are one", r.InputSI, r.DoubtSI)
			}
		}
	}
}

// Kessel, Kacker, Sommer, Measurement 45 (2012) 1661-1669: the line through the
// end points of a range calibration, y on x, and what it leaves in doubt.
func TestAPressureSensorsRange(t *testing.T) {
	d := columns(t, "pressure-sensor-range.csv")
	y, x := d[0], d[1]
	const relStd, countHalf = 0.000115, 5e-5
	xStd := countHalf / math.Sqrt(3)
	last := len(x) - 1
	l := throughTwo(measured{x[0], y[0], xStd, relStd * y[0]}, measured{x[last], y[last], xStd, relStd * y[last]})
	near(t, "b", l.B, 9.799118079372857, 1e-12)
	near(t, "u(b)", math.Sqrt(l.VarB), 0.0011438175474686209, 1e-11)
	near(t, "u(a)", math.Sqrt(l.VarA), 0.0002828761730473424, 1e-11)
	near(t, "r(a,b)", l.CovAB/math.Sqrt(l.VarA*l.VarB), -0.12117041864179227, 1e-9)
	if l.A != 0 {
		t.Errorf("a = %v", l.A)
	}
	// The printed U rests on rounded coefficients: u(a) 0.00028, u(b) 0.00114,
	// r(a,b) as it is.
	rounded := estimate.Line{A: l.A, B: l.B, VarA: 0.00028 * 0.00028, VarB: 0.00114 * 0.00114, CovAB: -0.1212 * 0.00028 * 0.00114}
	printed := []float64{0, 0.00196, 0.00196, 0.00294, 0.00392, 0.0039, 0.0039, 0.0039, 0.0029, 0.002, 0}
	expanded := []float64{0.00582812, 0.00584124, 0.00589119, 0.00597701, 0.0060972, 0.00624986, 0.00643263, 0.00664303, 0.00687865, 0.00713689, 0.00741554}
	const linearityHalf = 0.005
	for i := range x {
		at, std := l.At(x[i])
		_, stdRounded := rounded.At(x[i])
		u := func(line float64) float64 {
			return 2 * estimate.RootSum([]estimate.Component{{Std: line}, {Std: l.B * xStd}, {Std: linearityHalf / math.Sqrt(3)}})
		}
		if math.Abs(math.Abs(y[i]-at)-printed[i]) > 5e-5 { // the table has two or three digits
			t.Errorf("nonlinearity at %v is %v, printed %v", x[i], y[i]-at, printed[i])
		}
		near(t, "U from rounded coefficients", u(stdRounded), expanded[i], 2e-6)
		near(t, "U", u(std), expanded[i], 1.5e-3)
	}
}

type classes struct {
	EN struct {
		Percent map[string]float64 `json:"classes_percent_of_span"`
	} `json:"EN837-1"`
	ASME struct {
		Percent map[string][3]float64 `json:"grades_percent_of_span"`
	} `json:"ASME_B40.100"`
	ISO struct {
		Limits map[string]map[string]float64 `json:"limits_percent"`
	} `json:"ISO376"`
	JIS struct {
		Columns       []string  `json:"columns"`
		Retrace       []float64 `json:"retrace"`
		Repeatability []float64 `json:"repeatability"`
		Tenth         []float64 `json:"tenth_revolution"`
		Half          []float64 `json:"half_revolution"`
		One           []float64 `json:"one_revolution"`
		Entire        []float64 `json:"entire_range"`
	} `json:"JIS_B7503_2011"`
}

func readClasses(t *testing.T) (c classes) {
	t.Helper()
	text, err := os.ReadFile("testdata/classes.json")
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, &c); err != nil {
		t.Fatal(err)
	}
	return c
}

func limitNamed(t *testing.T, name string) Limit {
	t.Helper()
	l, err := FindLimit(name, nil)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// testdata/SOURCES.md says which of these are from memory; so must the table.
func TestEveryClassLimitIsThePublishedOne(t *testing.T) {
	c := readClasses(t)
	for class, percent := range c.EN.Percent {
		l := limitNamed(t, "EN 837-1 class "+class)
		for _, s := range l.Shares {
			near(t, l.Name, 100*s, percent, 1e-12)
		}
		if l.Origin != FromStandard || l.HystOrigin != FromMemory {
			t.Errorf("%s: origins %q, %q", l.Name, l.Origin, l.HystOrigin)
		}
	}
	readGrades := "4A A D"
	for grade, percent := range c.ASME.Percent {
		l := limitNamed(t, "ASME B40.100 grade "+grade)
		for i := range percent {
			near(t, l.Name, 100*l.Shares[i], percent[i], 1e-12)
		}
		if isRead := strings.Contains(" "+readGrades+" ", " "+grade+" "); isRead != (l.Origin == FromStandard) {
			t.Errorf("%s is %q", l.Name, l.Origin)
		}
	}
	for i, column := range c.JIS.Columns {
		l := limitNamed(t, "JIS B 7503:2011, "+jisRow(column))
		for k, pair := range [][2]float64{
			{l.HysteresisSI, c.JIS.Retrace[i]}, {l.RepeatSI, c.JIS.Repeatability[i]}, {l.Partial[0].LimitSI, c.JIS.Tenth[i]},
			{l.Partial[1].LimitSI, c.JIS.Half[i]}, {l.Partial[2].LimitSI, c.JIS.One[i]}, {l.EntireSI, c.JIS.Entire[i]},
		} {
			near(t, l.Name+" figure "+strconv.Itoa(k), pair[0]*1e6, pair[1], 1e-12)
		}
	}
	if n := len(c.EN.Percent) + len(c.ASME.Percent) + len(c.JIS.Columns) + 1; len(Limits()) != n || n != 7+8+19+1 {
		t.Errorf("%d limits, published %d", len(Limits()), n)
	}
	for i, name := range []string{"00", "0.5", "1", "2"} { // ISO 376:2011 Table 2, from memory
		for k, term := range []string{"b", "b1", "fc", "f0", "v"} {
			near(t, "ISO 376 "+name+" "+term, forceClasses()[i].percent[k], c.ISO.Limits[name][term], 1e-12)
		}
	}
}

// jisRow names a column of the file as the table does.
func jisRow(column string) string {
	graduation, reach, _ := strings.Cut(column, ":")
	name := strings.Replace(graduation, "small ", "small, ", 1) + " mm, range "
	if to, ok := strings.CutPrefix(reach, "<="); ok {
		return name + "to " + to + " mm"
	}
	return name + strings.Replace(reach, "-", " to ", 1) + " mm"
}

// EN 837-1:1996 Table 11, read, with its worked example: span 10 bar, class 1.6,
// limit 10 x 1.6 / 100 = 0.16 bar. 5.00 rising and 5.17 falling at 5 bar fail the
// limit of error falling, and that of hysteresis, which is from memory.
func TestWorkedExampleOfEN837(t *testing.T) {
	l := limitNamed(t, "EN 837-1 class 1.6")
	tight, loose := l.errorAt(5e5, 0, 10e5)
	near(t, "limit, bar", tight/1e5, 0.16, 1e-15)
	if tight != loose {
		t.Error("two limits at one place")
	}
	simple, _ := FindRule("simple acceptance")
	for _, c := range []struct {
		bar  float64
		want Outcome
	}{{0.16, Pass}, {0.1600001, Fail}, {-0.16, Pass}, {-0.1600001, Fail}} {
		e := estimate.Estimate{Value: c.bar * 1e5, System: 100, DoF: math.Inf(1), Method: "given"}
		if got := simple.Decide(e, tight).Outcome; got != c.want {
			t.Errorf("%v bar: %v", c.bar, got)
		}
	}
	b := newBench(t, Transducer, 0, 2.5e5, 5e5, 7.5e5, 10e5)
	for i, q := range b.test.Plan.Points {
		b.read(i, Up, 0, 0, q.SI, q.SI)
	}
	for i := 3; i >= 0; i-- {
		down := b.test.Plan.Points[i].SI
		if i == 2 {
			down = 5.17e5
		}
		b.read(i, Down, 0, 0, b.test.Plan.Points[i].SI, down)
	}
	b.test.Limit, b.test.Rule = "EN 837-1 class 1.6", "simple acceptance"
	r := b.evaluate()
	failed := map[string]int{}
	for _, c := range r.Verdict.Checks {
		if c.Outcome == Fail {
			failed[c.What]++
			near(t, "at", c.Nominal.SI, 5e5, 1e-12)
		}
	}
	if r.Verdict.Outcome != Fail || failed["error, down"] != 1 || failed["falling less rising"] != 1 || len(failed) != 2 {
		t.Errorf("%v %v", r.Verdict.Outcome, failed)
	}
	if !strings.Contains(strings.Join(r.Verdict.Why, " "), "from memory") {
		t.Errorf("the limit from memory is asserted: %q", r.Verdict.Why)
	}
}

// ILAC-G8:09/2019 clause 4.2; probabilities computed, normal distribution, k = 2.
func TestEveryDecisionCase(t *testing.T) {
	guard, _ := FindRule("guard band U")
	measured := func(y float64) estimate.Estimate {
		return estimate.Estimate{Value: y, System: 0.2, DoF: math.Inf(1), Method: "given"}
	}
	d := guard.Decide(measured(1.3), 1.6)
	near(t, "accepted up to", d.Accept, 1.2, 1e-12)
	near(t, "chance of conformity", d.Chance, 0.933192798731, 1e-11)
	for _, c := range []struct {
		rule string
		y    float64
		want Outcome
	}{
		{"guard band U", 1.2, Pass}, {"guard band U", 1.3, Undecided}, {"guard band U", 1.9, Undecided}, {"guard band U", 2.01, Fail},
		{"simple acceptance", 1.6, Pass}, {"simple acceptance", 1.61, Fail},
		{"ISO 14253-1", 1.26, Pass}, {"ISO 14253-1", 1.28, Undecided}, {"ISO 14253-1", 1.94, Fail},
		{"guard band 3 U", 0.4, Pass}, {"guard band 3 U", 0.41, Undecided},
	} {
		rule, err := FindRule(c.rule)
		if err != nil {
			t.Fatal(err)
		}
		for _, sign := range []float64{1, -1} {
			if got := rule.Decide(measured(sign*c.y), 1.6).Outcome; got != c.want {
				t.Errorf("%s at %v: %v, want %v", c.rule, sign*c.y, got, c.want)
			}
		}
	}
	for name, want := range map[string]float64{ // chance beyond the limit for a value found just at the edge of a pass
		"simple acceptance": 0.5, "guard band U": 0.02275013, "ISO 14253-1": 0.04947147, "guard band 1.5 U": 0.001349898, "guard band 3 U": 9.865876e-10,
	} {
		r, _ := FindRule(name)
		const limit = 1e3 // far from its mirror image
		y := measured(limit - r.Guard*0.4)
		near(t, name, 1-y.ChanceBelow(limit), want, 1e-5)
		near(t, name+" as told", r.FalsePct/100, want, 2e-3)
	}
	for name := range map[string]bool{"ISO 14253-1": true, "guard band 1.5 U": true, "guard band 3 U": true} {
		if r, _ := FindRule(name); !r.Memory {
			t.Errorf("%s is asserted", name)
		}
	}
}

// EURAMET cg-17 and DKD-R 6-1, formulas from memory; the numbers are invented,
// their results computed.
func TestWorkedPointOfTheGuide(t *testing.T) {
	b := newBench(t, Transducer, 50)
	b.test.Plan.Repeats = 2
	b.test.Plan.High = pascals(t, 100)
	b.test.Instruments.Reference.Limit = pascals(t, 0.01*math.Sqrt(3))
	b.test.Instruments.TestedCountSI = 0.01
	b.read(0, Up, 0, 0, 50, 50.02)
	b.read(0, Down, 0, 0, 50, 50.11)
	b.read(0, Up, 0, 1, 50, 50.05)
	b.read(0, Down, 0, 1, 50, 50.12)
	b.test.ZeroBefore = []Zero{{Repeat: 0, Indicated: exact(0)}, {Repeat: 1, Indicated: exact(0.01)}}
	b.test.ZeroAfter = []Zero{{Repeat: 0, Indicated: exact(0.01)}, {Repeat: 1, Indicated: exact(0.03)}}
	g := b.evaluate().Curves[0].At[0].Guide
	const digits = 1e-9
	near(t, "deviation", g.DeviationSI, 0.075, digits)
	near(t, "h", g.HysteresisSI, 0.08, digits)
	near(t, "b'", g.RepeatSI, 0.02, digits)
	near(t, "f0", g.ZeroSI, 0.02, digits)
	for name, want := range map[string]float64{
		"standard": 0.01, "resolution": 0.002886751346, "zero": 0.005773502692, "repeatability": 0.005773502692, "hysteresis": 0.02309401077, "reproducibility": 0,
	} {
		for _, line := range g.Terms {
			if line.Name == name && math.Abs(line.StdSI-want) > digits*math.Max(want, 1) {
				t.Errorf("%s: %v, want %v", name, line.StdSI, want)
			}
		}
	}
	near(t, "u", sumOf(g.Terms), 0.02661453237, digits)
	near(t, "U", g.ExpandedSI, 0.05322906474, digits)
	near(t, "error span", g.ErrorSpanSI, 0.1282290647, digits)
}

// JCGM 100:2008 H.1: the budget of an end gauge, in nm; results from unrounded
// inputs, the guide prints u = 32, 16 degrees of freedom and U99 = 93.
func TestBudgetOfTheEndGauge(t *testing.T) {
	lines := []Term{
		{"l_s", 25, 18, "B", "certificate"}, {"d: repeated readings", 5.8, 24, "A", ""}, {"d: comparator, random", 3.9, 5, "B", ""},
		{"d: comparator, systematic", 6.7, 8, "B", ""}, {"delta alpha", 1e-6 / math.Sqrt(3) * 5.0e6, 50, "B", ""}, {"delta theta", 0.05 / math.Sqrt(3) * 575, 2, "B", ""},
	}
	u := sumOf(lines)
	near(t, "u", u, 31.6637674111383, 1e-12)
	parts := make([]estimate.Component, len(lines))
	for i, l := range lines {
		parts[i] = estimate.Component{Std: l.StdSI, DoF: l.DoF}
	}
	dof := estimate.EffectiveDoF(parts)
	near(t, "degrees of freedom", dof, 16.752, 1e-5)
	if v := math.Round(estimate.Student(0.99, math.Trunc(dof)) * math.Round(u)); v != 93 {
		t.Errorf("U99 = %v nm", v)
	}
}

// ISO 376:2011 clause 7, formulas from memory; numbers invented, results computed.
func TestWorkedNumbersOfISO376(t *testing.T) {
	p := forcePoint([]mounting{
		{rising: []float64{2.0001, 2.00018}},
		{rising: []float64{2.0004}, falling: []float64{2.0029}},
		{rising: []float64{1.9998}, falling: []float64{2.0021}},
	}, 2.00005)
	const digits = 1e-8
	near(t, "b", p.Reproducibility, 0.02999850007, digits)
	near(t, "b'", p.Repeatability, 0.00399972002, digits)
	near(t, "fc", p.Interpolation, 0.002499937502, digits)
	near(t, "v", p.Reversibility, 0.1199932531, digits)
	known := func(v float64) estimate.Estimate { return estimate.Exact(v, "given") }
	f0 := known(100 * 0.0002 / 2.0)
	near(t, "f0", f0.Value, 0.01, digits)
	terms := []estimate.Estimate{known(p.Reproducibility), known(p.Repeatability), known(p.Interpolation), f0, known(p.Reversibility)}
	if c := forceClass(terms...); c != "0.5" {
		t.Errorf("class %s", c)
	}
	terms[4] = known(0.01)
	if c := forceClass(terms...); c != "00" {
		t.Errorf("class %s in every term but reversibility", c)
	}
	terms[0] = estimate.Unknown("mounted once")
	if c := forceClass(terms...); c != "" {
		t.Errorf("class %q without a term", c)
	}
}

// ASTM E74, factors from memory; deviations invented, results computed.
func TestWorkedNumbersOfASTME74(t *testing.T) {
	d := []float64{0.3, -0.2, 0.1, 0.4, -0.5, 0.2, -0.1, 0.0, 0.3, -0.3, -0.4, 0.2}
	s, factor := lowerLimit(d, 2)
	near(t, "s", s, 0.329983164554, 1e-11)
	near(t, "LLF", factor, 0.791959594929, 1e-11)
	near(t, "class AA from", classAA*factor, 1583.91918986, 1e-11)
	near(t, "class A from", classA*factor, 316.783837972, 1e-11)
}
