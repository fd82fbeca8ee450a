package findings

import (
	"math"
	"slices"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// The sources of the numbers in this file are in testdata/SOURCES.md.

func sixteenSteps() []float64 {
	return []float64{0, 1, 2, 3, 2, 1, 0, -1, -2, -3, -2, -1, 0, 1, 2, 3}
}

// played is the output of the play operator of half-width r.
func played(u []float64, r float64) []float64 {
	var out []float64
	now := 0.0
	for _, x := range u {
		now = play(now, x-r, x+r)
		out = append(out, now)
	}
	return out
}

func TestPlayIsThePublishedOperator(t *testing.T) {
	want := []float64{0, 0, 1, 2, 2, 2, 1, 0, -1, -2, -2, -2, -1, 0, 1, 2}
	if got := played(sixteenSteps(), 1); !slices.Equal(got, want) {
		t.Errorf("play of half-width 1:\n got %v\nwant %v", got, want)
	}
}

func TestWeightedPlaysArePrandtlIshlinskii(t *testing.T) {
	want := []float64{0, 0.5, 1.3, 2.3, 1.8, 1.3, 0.5, -0.3, -1.3, -2.3, -1.8, -1.3, -0.5, 0.3, 1.3, 2.3}
	sum := summed(sixteenSteps())
	for i := range want {
		if math.Abs(sum[i]-want[i]) > 1e-12 {
			t.Errorf("step %d: %g, want %g", i, sum[i], want[i])
		}
	}
	// They know no rate: the turning points alone give the same ends.
	turns := summed([]float64{0, 3, -3, 3})
	for k, i := range []int{0, 3, 9, 15} {
		if math.Abs(turns[k]-want[i]) > 1e-12 {
			t.Errorf("turning point %d: %g, want %g", k, turns[k], want[i])
		}
	}
}

// summed is the plays of half-width 0, 1 and 2 with the weights 0.5, 0.3 and 0.2.
func summed(u []float64) []float64 {
	sum := make([]float64, len(u))
	for k, r := range []float64{0, 1, 2} {
		for i, y := range played(u, r) {
			sum[i] += []float64{0.5, 0.3, 0.2}[k] * y
		}
	}
	return sum
}

// A loop of play of half-width r has the area 4 r (A - r) at amplitude A: 8 for 1
// and 3; that of the weighted sum is 4.
func TestPlayHasThePublishedArea(t *testing.T) {
	var u []float64
	for _, leg := range [][2]float64{{0, 3}, {3, -3}, {-3, 3}} {
		for k := range 6000 {
			u = append(u, leg[0]+(leg[1]-leg[0])*float64(k)/6000)
		}
	}
	area := func(y []float64) (sum float64) {
		for i := 6000; i < len(u); i++ { // one closed loop from the first top
			sum += (y[i] + y[i-1]) / 2 * (u[i] - u[i-1])
		}
		return math.Abs(sum)
	}
	if a := area(played(u, 1)); math.Abs(a-8) > 0.01 {
		t.Errorf("area of play %g, want 8", a)
	}
	if a := area(summed(u)); math.Abs(a-4) > 0.01 {
		t.Errorf("area of the sum %g, want 4", a)
	}
}

// stuck is a record of points with a straight tensioner that sticks over s of
// setting after a reversal and then slips by j (setting units): one rise and one
// fall between 0 and 10 at one unit a second.
func stuck(s, j float64) *data {
	d := &data{r: &analyze.Result{}, up: line{-s / 2, 1}, down: line{s / 2, 1}, countM: 1e-6, noiseM: 1e-6, workingM: 8, workingSI: 8, stepS: 0.1}
	d.r.Cycles = []analyze.Cycle{{Role: analyze.Ramp, First: 0, Peak: 200, Last: 400, Rising: analyze.Fit{Points: 200}}}
	now := -1.0
	for i := range 401 {
		p := float64(i) / 20
		if i > 200 {
			p = float64(400-i) / 20
		}
		target := play(now, p-s/2, p+s/2)
		if math.Abs(target-now) >= j {
			now = target
		}
		d.e = append(d.e, now)
		d.t, d.p = append(d.t, float64(i)/10), append(d.p, p)
		d.phase = append(d.phase, analyze.Loading)
	}
	d.r.Cycles[0].Zero = known(-1, 0, 1, "made up")
	d.follow = d.newFollow(0)
	d.jumps = d.findJumps()
	return d
}

// With J = 0 a sticking valve is a dead band, which is play: no jump is left.
func TestDeadBandLeavesNoJump(t *testing.T) {
	d := stuck(2, 0)
	if v := d.thirdJump(); !(v.Value < 1e-6) {
		t.Errorf("a dead band of 2 leaves jumps of %g of the working stretch", v.Value)
	}
	for i, x := range d.follow.rest {
		if d.follow.good[i] && math.Abs(x) > 1e-9 {
			t.Fatalf("point %d: %g is left of a dead band", i, x)
		}
	}
}

// With slips of J the stretch moves in steps of J: a window's mean sees most of
// one.
func TestSlipJumpsAreSeen(t *testing.T) {
	d := stuck(2, 0.8)
	v, ok := d.third()
	if !ok || v < 0.4 || v > 0.85 {
		t.Errorf("slips of 0.8 are seen as %g", v)
	}
}

func TestLawsOfHoldsArePublishedOnes(t *testing.T) {
	// Values of the two laws at the published times, and densely between.
	creep := func(t float64) float64 { return 100 - 1.5*math.Log1p(t/10) }
	leak := func(t float64) float64 { return 40 + 60*math.Exp(-t/300) }
	for _, c := range []struct{ at, creep, leak float64 }{{0, 100, 100}, {10, 98.9602792292, 40 + 60*math.Exp(-1./30)}, {60, 97.0811347764, 89.1238451847}, {600, 93.8336892037, 48.1201169942}} {
		if math.Abs(creep(c.at)-c.creep) > 1e-9 || math.Abs(leak(c.at)-c.leak) > 1e-9 {
			t.Fatalf("the laws at %g s are %.10f and %.10f", c.at, creep(c.at), leak(c.at))
		}
	}
	for _, c := range []struct {
		law  func(float64) float64
		want float64
	}{{creep, 1}, {leak, 0}} {
		d := &data{}
		for i := range 601 {
			d.t = append(d.t, float64(i))
			d.follow.p = append(d.follow.p, c.law(float64(i)))
		}
		d.holds = []hold{{first: 0, last: 600}}
		if got := d.holdCreeps(); !got.Known() || got.Value != c.want {
			t.Errorf("told as %v, want %g", got, c.want)
		}
	}
}

// A square thread of 32 mm, 4 mm pitch, 2 starts and a collar of 40 mm raises
// 6.4 kN with 26.18 N m at friction 0.08, an efficiency of 0.311. The same screw
// gone dry, at 0.20, is found; at 0.085 it is not.
func TestDryScrewIsFoundByItsEfficiency(t *testing.T) {
	efficiency := func(mu float64) float64 {
		const load, lead, mean, collar = 6400.0, 0.008, 0.030, 0.040
		tan := lead / (math.Pi * mean)
		torque := load * (mean/2*(tan+mu)/(1-mu*tan) + mu*collar/2)
		return load * lead / (2 * math.Pi * torque)
	}
	if got := efficiency(0.08); math.Abs(got-0.311294157998409) > 1e-12 {
		t.Fatalf("efficiency %.15f", got)
	}
	for _, c := range []struct {
		mu  float64
		dry bool
	}{{0.085, false}, {0.20, true}} {
		m := map[FeatureKey]Feature{}
		for _, f := range features() {
			m[f.key] = Feature{Key: f.key, Name: f.name, In: f.in, Is: estimate.Unknown("not made up")}
		}
		f := m[fScrew]
		f.Is = known(efficiency(c.mu)/efficiency(0.08), 0.02, math.Inf(1), "made up")
		m[fScrew] = f
		if got := found(mill.SetByTorque, m, Screw); got != c.dry {
			t.Errorf("friction %g: found %t", c.mu, got)
		}
	}
}
