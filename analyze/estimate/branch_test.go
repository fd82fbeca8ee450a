package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"
)

// A ramp as a display of a coarse count shows it, in psi of setting: T-1's way
// from 120 to 860, one count of 0.0005 in on 20 in being 47 of them, of 0.01 mm
// 37 and of 0.00005 in 4.7.
type ramped struct {
	count, noise, step float64
	rho                float64 // of the noise, from one reading to the next
	inX                bool    // the noise is the setting's; else the band's, seen by the display
}

const (
	rampLow, rampSpan = 120.0, 740.0
	rampTarget        = 724.0
)

// draw is one ramp with its true line.
func (c ramped) draw(r *rand.Rand) (out Readings, a, b float64) {
	a, b = c.count*100*r.Float64(), 1+0.02*r.Float64()
	at, d := rampLow+c.step*r.Float64(), r.NormFloat64()
	var y []float64
	for ; at < rampLow+rampSpan; at += c.step {
		d = c.rho*d + math.Sqrt(1-c.rho*c.rho)*r.NormFloat64()
		x, seen := at, at
		if c.inX {
			x += c.noise * d
		} else {
			seen += c.noise * d
		}
		out.X = append(out.X, x)
		y = append(y, math.Round((a+b*seen)/c.count)*c.count)
	}
	out.Lo, out.Hi = Rounded(y, c.count, 0)
	if c.rho > 0 {
		out.Memory = int(math.Ceil(math.Log(0.05) / math.Log(c.rho)))
	}
	return out, a, b
}

// state tells the fit a share of the true noise, in the variable that it is in.
func (c ramped) state(r *Readings, share float64) {
	if c.inX {
		r.XStd = share * c.noise
	} else {
		r.YStd = share * c.noise
	}
}

// trials is how many simulated ramps a test draws: few by default, as many as
// TAUTRAMP_TRIALS says when the figures are wanted.
func trials(few int) int {
	if n, err := strconv.Atoi(os.Getenv("TAUTRAMP_TRIALS")); err == nil && n > 0 {
		return n
	}
	if testing.Short() {
		return max(2, few/8)
	}
	return few
}

// chance allows a share of n trials to miss its limits by 3.7 standard errors.
func chance(limit float64, n int) float64 { return 3.7 * math.Sqrt(limit*(1-limit)/float64(n)) }

func TestBranchIntervalsHoldTheTruth(t *testing.T) {
	// Nominal 95 %, and what the program asks of it.
	const low, high = 0.935, 0.965
	for _, c := range []struct {
		name string
		ramped
		stated float64 // noise that the caller states, of the true one; 0: none
	}{
		{"0.0005 in, much noise", ramped{count: 47, noise: 2.4, step: 0.8}, 0.9},
		{"0.0005 in, much slow noise", ramped{count: 47, noise: 2.4, step: 0.8, rho: 0.8}, 0.9},
		{"0.0005 in, as much as a step", ramped{count: 47, noise: 0.8, step: 0.8}, 0.9},
		{"0.0005 in, as much as a step, slow", ramped{count: 47, noise: 0.8, step: 0.8, rho: 0.8}, 0.9},
		{"0.0005 in, 3 readings/s", ramped{count: 47, noise: 0.8, step: 2.7}, 0.8},
		{"0.0005 in, hardly any noise", ramped{count: 47, noise: 0.1, step: 2.7}, 0.8},
		{"0.0005 in, noise not stated", ramped{count: 47, noise: 0.8, step: 2.7}, 0},
		{"0.01 mm", ramped{count: 37, noise: 2.4, step: 2.7}, 0.9},
		{"0.00005 in", ramped{count: 4.7, noise: 0.8, step: 0.8}, 0.9},
		{"0.00005 in, slow", ramped{count: 4.7, noise: 0.8, step: 0.8, rho: 0.8}, 0.9},
		{"0.00005 in, 3 readings/s, slow", ramped{count: 4.7, noise: 0.3, step: 2.7, rho: 0.8}, 0.8},
		{"fine", ramped{count: 1, noise: 2.4, step: 0.8}, 0.9},
		{"fine, slow", ramped{count: 1, noise: 2.4, step: 0.8, rho: 0.9}, 0.9},
		{"fine, noise of the setting", ramped{count: 1, noise: 2.4, step: 0.8, inX: true}, 0.9},
	} {
		n := trials(24)
		r := rand.New(rand.NewPCG(1, uint64(c.noise*1000+c.count)))
		slope, level := 0, 0
		var bias, square float64
		methods := map[Method]int{}
		for range n {
			d, a, b := c.draw(r)
			c.state(&d, c.stated)
			f, err := FitBranch(d)
			if err != nil {
				t.Fatalf("%s: %v", c.name, err)
			}
			methods[f.Method]++
			k := Student95(f.DoF)
			if math.Abs(f.B-b) <= k*math.Sqrt(f.VarB) {
				slope++
			}
			if y, std := f.At(rampTarget); math.Abs(y-a-b*rampTarget) <= k*std {
				level++
			}
			bias += (f.B - b) / float64(n)
			square += (f.B - b) * (f.B - b) / float64(n)
		}
		ps, pl := float64(slope)/float64(n), float64(level)/float64(n)
		t.Logf("%-34s slope %.3f, level %.3f, slope's sd %.3f %%, bias %+.4f %%, %v", c.name, ps, pl, 100*math.Sqrt(square), 100*bias, methods)
		for _, p := range []float64{ps, pl} {
			if p < low-chance(low, n) || p > high+chance(high, n) {
				t.Errorf("%s: the truth lies inside in %.1f %% of %d, want %.1f to %.1f", c.name, 100*p, n, 100*low, 100*high)
			}
		}
		if limit := 0.001 + 4*math.Sqrt(square/float64(n)); math.Abs(bias) > limit {
			t.Errorf("%s: slope off by %.4f on average, limit %.4f", c.name, bias, limit)
		}
	}
}

// bound is the Cramer-Rao bound of the slope's variance: readings quantised,
// noise known to be normal, its size known.
func (c ramped) bound(d Readings, a, b float64) float64 {
	var i0, i1, i2 float64
	for _, x := range d.X {
		told := 0.0
		mean := a + b*x
		for k := -3.0; k <= 3; k++ {
			lo := math.Round(mean/c.count)*c.count + (k-0.5)*c.count
			l, ha, hb := cell((lo-mean)/c.noise, (lo+c.count-mean)/c.noise)
			told += math.Exp(l) * (ha - hb) * (ha - hb)
		}
		told /= c.noise * c.noise
		i0, i1, i2 = i0+told, i1+told*(x-rampTarget), i2+told*(x-rampTarget)*(x-rampTarget)
	}
	return i0 / (i0*i2 - i1*i1)
}

// handDriven is a ramp in pieces: strokes of a hand pump with sag, or a staircase
// of holds, of which the readings at the setting's highest value so far are kept
// while it moves. The noise is the transducer's: the display does not see it.
func handDriven(r *rand.Rand, count, noise float64, strokes bool) (out Readings, a, b float64) {
	a, b = 1000*r.Float64(), 1+0.02*r.Float64()
	period, moves, rise, sag := 10.0, 3.0, 74.0, 0.0
	if strokes {
		period, moves, rise, sag = 2, 0.6, 14.8, 0.01
	}
	low := rampLow + 10*r.Float64()
	top := 0.0
	var y []float64
	for i := range 1000 {
		t := float64(i) * 0.1
		part := math.Mod(t, period)
		p := low + rise*(math.Floor(t/period)+math.Min(1, part/moves))
		if part > moves {
			p -= sag * p * (part - moves) / (period - moves)
		}
		if part <= moves && p > top {
			out.X = append(out.X, p+noise*r.NormFloat64())
			y = append(y, math.Round((a+b*p)/count)*count)
		}
		top = math.Max(top, p)
	}
	out.Lo, out.Hi = Rounded(y, count, 0)
	out.XStd = 0.9 * noise
	return out, a, b
}

func TestBranchOfStrokesAndStaircases(t *testing.T) {
	for _, c := range []struct {
		count, noise float64
		strokes      bool
	}{{47, 1, true}, {4.7, 1, true}, {47, 1, false}, {4.7, 1, false}} {
		n, slope, level, bias := trials(40), 0, 0, 0.0
		for k := range n {
			d, a, b := handDriven(rand.New(rand.NewPCG(uint64(k), 8)), c.count, c.noise, c.strokes)
			f, err := FitBranch(d)
			if err != nil {
				t.Fatal(err)
			}
			factor := Student95(f.DoF)
			if math.Abs(f.B-b) <= factor*math.Sqrt(f.VarB) {
				slope++
			}
			if y, std := f.At(rampTarget); math.Abs(y-a-b*rampTarget) <= factor*std {
				level++
			}
			bias += (f.B - b) / float64(n)
		}
		ps, pl := float64(slope)/float64(n), float64(level)/float64(n)
		t.Logf("%+v: slope %.3f, level %.3f, bias %+.4f %%", c, ps, pl, 100*bias)
		if math.Min(ps, pl) < 0.93-chance(0.93, n) || math.Abs(bias) > 0.001 {
			t.Errorf("%+v: slope %.3f, level %.3f, bias %+.4f %%", c, ps, pl, 100*bias)
		}
	}
}

func TestBranchReachesTheLimit(t *testing.T) {
	// Variance of the slope against the Cramer-Rao bound, averaged over where the
	// counts lie, for noise from 0.3 of the change a reading on.
	for _, c := range []ramped{
		{count: 47, noise: 0.24, step: 0.8}, {count: 47, noise: 0.4, step: 0.8}, {count: 47, noise: 0.8, step: 0.8},
		{count: 47, noise: 2.4, step: 0.8}, {count: 37, noise: 1.35, step: 2.7}, {count: 4.7, noise: 1.2, step: 2.7},
		{count: 2, noise: 2.4, step: 0.8},
	} {
		n := trials(24)
		r := rand.New(rand.NewPCG(2, uint64(c.noise*1000+c.count)))
		var square, bound float64
		for range n {
			d, a, b := c.draw(r)
			c.state(&d, 0.9)
			f, err := FitBranch(d)
			if err != nil {
				t.Fatal(err)
			}
			square += (f.B - b) * (f.B - b)
			bound += c.bound(d, a, b)
		}
		ratio := square / bound
		t.Logf("count %v, noise %v, %v a reading: %.3f of the bound", c.count, c.noise, c.step, ratio)
		if slack := 4 * math.Sqrt(2/float64(n)); ratio > 1.25*(1+slack) || ratio < 0.75*(1-slack) {
			t.Errorf("count %v, noise %v, %v a reading: variance %.3f of the bound (%d trials)", c.count, c.noise, c.step, ratio, n)
		}
	}
}

func TestBranchBeatsLeastSquaresOnTheSamePairs(t *testing.T) {
	// 0.0005 in, 2.4 psi of noise on the setting, 0.8 psi a reading, T-1's whole
	// way. The ratio hangs on how the ends of the way fall within a count.
	c := ramped{count: 47, noise: 2.4, step: 0.8, inX: true}
	n := trials(40)
	r := rand.New(rand.NewPCG(3, 3))
	var ours, plain float64
	for range n {
		d, _, b := c.draw(r)
		d.XStd = c.noise
		f, err := FitBranch(d)
		if err != nil {
			t.Fatal(err)
		}
		mid := make([]float64, len(d.X))
		for i := range mid {
			mid[i] = (d.Lo[i] + d.Hi[i]) / 2
		}
		l, err := FitLine(d.X, mid)
		if err != nil {
			t.Fatal(err)
		}
		ours += (f.B - b) * (f.B - b)
		plain += (l.B - b) * (l.B - b)
	}
	t.Logf("variance of the slope %.3f of plain least squares", ours/plain)
	if ours > 0.4*plain*(1+3*math.Sqrt(2/float64(n))) {
		t.Errorf("variance of the slope %.3f of plain least squares", ours/plain)
	}
}

func TestBranchSaysHowItWasFitted(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	for _, c := range []struct {
		ramped
		want Method
	}{
		{ramped{count: 47, noise: 1e-9, step: 0.8}, ByFeasible},
		{ramped{count: 47, noise: 2.4, step: 0.8}, ByLikelihood},
		{ramped{count: 1, noise: 2.4, step: 0.8}, ByBoth},
	} {
		d, a, b := c.draw(r)
		d.XStd = c.noise
		f, err := FitBranch(d)
		if err != nil {
			t.Fatal(err)
		}
		if f.Method != c.want || (f.Feasible != nil) != (c.want == ByFeasible) {
			t.Errorf("%+v: %s, feasible set %v", c.ramped, f.Method, f.Feasible != nil)
		}
		if f.Feasible != nil {
			lo, hi := f.Feasible.At(rampTarget)
			if y := a + b*rampTarget; y < lo || y > hi {
				t.Errorf("the true line is not feasible: %v outside %v to %v", y, lo, hi)
			}
			y, std := f.At(rampTarget)
			want, wantStd := f.Feasible.Centre.At(rampTarget)
			if math.Abs(y-want) > 0.3*wantStd || std > 2*wantStd || std < 0.9*wantStd {
				t.Errorf("%v +/- %v where the polygon has %v +/- %v", y, std, want, wantStd)
			}
		}
	}
}

func TestBranchCountsOutliersAndIgnoresThem(t *testing.T) {
	for _, c := range []ramped{{count: 47, noise: 0.5, step: 0.8}, {count: 47, noise: 0.01, step: 2.7}, {count: 1, noise: 2.4, step: 0.8}} {
		r := rand.New(rand.NewPCG(6, uint64(c.count)))
		d, _, b := c.draw(r)
		clean, err := FitBranch(d)
		if err != nil {
			t.Fatal(err)
		}
		for _, i := range []int{7, len(d.X) / 3, len(d.X) / 2, len(d.X) - 5} {
			d.Lo[i] += 6 * 47
			d.Hi[i] += 6 * 47
		}
		f, err := FitBranch(d)
		if err != nil {
			t.Fatal(err)
		}
		if f.Outliers != clean.Outliers+4 {
			t.Errorf("%+v: %d outliers, 4 were put in", c, f.Outliers)
		}
		if math.Abs(f.B-b) > 5*math.Sqrt(clean.VarB)+1e-4 || f.VarB > 3*clean.VarB {
			t.Errorf("%+v: slope off by %v, clean %v +/- %v", c, f.B-b, clean.B-b, math.Sqrt(clean.VarB))
		}
	}
}

func TestBranchHasNoUnits(t *testing.T) {
	// Pascals and metres give the same figures as psi and psi.
	r := rand.New(rand.NewPCG(7, 7))
	for _, c := range []ramped{{count: 47, noise: 0.3, step: 2.7}, {count: 47, noise: 2.4, step: 0.8}, {count: 1, noise: 2.4, step: 0.8}} {
		d, _, _ := c.draw(r)
		d.XStd = 0.9 * c.noise
		f, err := FitBranch(d)
		if err != nil {
			t.Fatal(err)
		}
		const pa, m = 6894.757, 2.7e-7
		e := Readings{XStd: d.XStd * pa}
		for i := range d.X {
			e.X, e.Lo, e.Hi = append(e.X, d.X[i]*pa), append(e.Lo, d.Lo[i]*m), append(e.Hi, d.Hi[i]*m)
		}
		g, err := FitBranch(e)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "A", g.A, f.A*m, 1e-5)
		near(t, "B", g.B, f.B*m/pa, 1e-6)
		near(t, "VarA", g.VarA, f.VarA*m*m, 1e-3)
		near(t, "VarB", g.VarB, f.VarB*m*m/pa/pa, 1e-3)
	}
}

func TestBranchOfNarrowIntervalsIsLeastSquares(t *testing.T) {
	// NIST StRD Norris, certified: as the intervals shrink, maximum likelihood
	// becomes least squares.
	d := columns(t, "norris.csv")
	lo, hi := Rounded(d[1], 1e-3, 0)
	c := censored{columns: [][]float64{ones(len(lo)), d[0]}, lo: lo, hi: hi}
	fit, ok := c.maximise([]float64{0, 1, 1}, math.Inf(1))
	if !ok {
		t.Fatal("no maximum")
	}
	near(t, "slope", fit.coefficients()[1], 1.00211681802045, 1e-7)
	near(t, "intercept", fit.coefficients()[0], -0.262323073774029, 1e-4)
	// The likelihood divides by n where the certified residual SD has n - 2.
	near(t, "noise", fit.sd(), 0.884796396144373*math.Sqrt(34.0/36), 1e-5)
	near(t, "slope's SD", math.Sqrt(fit.covariance().At(1, 1)), 0.429796848199937e-03*math.Sqrt(34.0/36), 1e-4)
}

func TestBranchOfAnExactLineAndBadInput(t *testing.T) {
	x := []float64{1, 2, 3, 4, 5, 6, 7, 8}
	f, err := FitBranch(Readings{X: x, Lo: x, Hi: x})
	if err != nil || math.Abs(f.B-1) > 1e-9 || math.IsNaN(f.VarB) {
		t.Errorf("a line of points: %+v, %v", f, err)
	}
	one, two := make([]float64, 8), make([]float64, 8)
	for i := range two {
		two[i] = 1
	}
	if f, err := FitBranch(Readings{X: x, Lo: one, Hi: two}); err != nil || math.Abs(f.B) > 0.2 || math.IsNaN(f.VarB) {
		t.Errorf("one code only: %+v, %v", f, err)
	}
	for _, c := range []struct {
		name string
		r    Readings
		want error
	}{
		{"nothing", Readings{}, ErrTooFew},
		{"lengths differ", Readings{X: x, Lo: x, Hi: x[:7]}, ErrTooFew},
		{"one x", Readings{X: one, Lo: x, Hi: x}, ErrNoSpread},
		{"interval backwards", Readings{X: x, Lo: x, Hi: one}, ErrBadValue},
	} {
		if _, err := FitBranch(c.r); !errors.Is(err, c.want) {
			t.Errorf("%s: %v, want %v", c.name, err, c.want)
		}
	}
}
