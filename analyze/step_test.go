package analyze

import (
	"fmt"
	"math"
	"os"
	"strconv"
	"testing"

	"tautramp/analyze/estimate"
)

// trials is how many rigs a statistical test draws: few by default, as many as
// TAUTRAMP_TRIALS says when the figures are wanted.
func trials(few int) int {
	if n, err := strconv.Atoi(os.Getenv("TAUTRAMP_TRIALS")); err == nil && n > 0 {
		return n
	}
	if testing.Short() {
		return max(1, few/6)
	}
	return few
}

// slipping is the ways of ramping in which steps are looked for.
func slipping() []struct {
	name    string
	countM  float64
	noiseSI float64
	perS    float64
	shape   shape
} {
	return []struct {
		name    string
		countM  float64
		noiseSI float64
		perS    float64
		shape   shape
	}{
		{"0.001 mm", 1e-6, 1 * psi, 10, smooth},
		{"0.001 mm, strokes", 1e-6, 1 * psi, 10, pumped},
		{"0.00005 in, stairs", 0.00005 * inch, 1 * psi, 5, stairs},
		{"0.00005 in, strokes, 5/s", 0.00005 * inch, 0.4 * psi, 5, pumped},
		{"0.0005 in", 0.0005 * inch, 1 * psi, 10, smooth},
		{"0.01 mm, 3/s", 0.01e-3, 0.4 * psi, 3.1, stairs},
		{"0.01 mm, strokes", 0.01e-3, 1 * psi, 5, pumped},
	}
}

func stepsText(steps []Step) string {
	text := ""
	for _, s := range steps {
		text += fmt.Sprintf("%s of %.3g m at %.1f s; ", s.Kind, s.SizeM.Value, s.T)
	}
	return text
}

func TestStepsOfTheMountAreFoundAndTheRampIsCutThere(t *testing.T) {
	for _, c := range slipping() {
		n := trials(6)
		found, tried := 0, 0
		for seed := range uint64(n) {
			b := newBench(seed + 8100)
			b.countM, b.noiseSI, b.extensionHz = c.countM, c.noiseSI, c.perS
			b.slipM = 0.01e-3
			if c.countM > 1.01e-6 {
				b.slipM = math.Max(0.01e-3, 3*c.countM)
			}
			if seed%2 == 1 {
				b.slipM = -b.slipM
			}
			h := cycles(c.shape, 4, 20, 860)
			from := h.t[h.begins[1]]
			b.slipS = from + (h.t[h.begins[2]]-from)*b.rng.Float64()
			r := analyzed(t, b.measure(h))
			tried++
			ok := len(r.Steps) == 1 && r.Steps[0].Kind == MountStep && math.Abs(r.Steps[0].T-b.slipS) <= 1
			if ok {
				found++
				if s := r.Steps[0].SizeM; math.Abs(s.Value-b.slipM) > 5*math.Hypot(s.Random, c.countM/2) {
					t.Errorf("%s: a slip of %.3g m is put at %.3g +/- %.2g", c.name, b.slipM, s.Value, s.Random)
				}
			} else {
				t.Logf("%s, seed %d: slip of %.3g m at %.1f s, found %s", c.name, seed, b.slipM, b.slipS, stepsText(r.Steps))
			}
			for i, pt := range r.Points {
				if cycle := r.Cycles[max(0, pt.Cycle)]; pt.Fitted && i >= cycle.CutAt {
					t.Fatalf("%s: pair %d is fitted, cycle %d is cut at %d", c.name, i, pt.Cycle, cycle.CutAt)
				}
			}
			if ok && !warned(r, "mount-step") {
				t.Errorf("%s: no warning", c.name)
			}
			// The other ramps stand as they are, each with its own zero.
			if !r.AtRising.SettingSI.Known() { // a coarse count hides the zero
				continue
			}
			near(t, c.name+": rising setting", r.AtRising.SettingSI.Value, b.settingAt(Rising, 9500*psi), 0.01+2*c.countM*b.settingPerM()/(724*psi))
		}
		t.Logf("%s: found within 1 s in %d of %d", c.name, found, tried)
		if float64(found) < 0.99*float64(tried)-3*math.Sqrt(0.01*float64(tried))-0.5 {
			t.Errorf("%s: found within 1 s in %d of %d", c.name, found, tried)
		}
	}
}

func TestStepsAreNotInventedInCleanRamps(t *testing.T) {
	for _, c := range slipping() {
		n, ramps, invented := trials(6), 0, 0
		for seed := range uint64(n) {
			b := newBench(seed + 8300)
			b.countM, b.noiseSI, b.extensionHz = c.countM, c.noiseSI, c.perS
			b.zeroM += c.countM * b.rng.Float64()
			r := analyzed(t, b.measure(cycles(c.shape, 4, 20, 860)))
			ramps += 2 * len(r.Cycles)
			invented += len(r.Steps)
			if len(r.Steps) > 0 {
				t.Logf("%s, seed %d: %s", c.name, seed, stepsText(r.Steps))
			}
		}
		t.Logf("%s: %d steps in %d clean ramps", c.name, invented, ramps)
		if invented > 0 {
			t.Errorf("%s: %d steps in %d clean ramps", c.name, invented, ramps)
		}
	}
}

// A hand pump sags by up to 3 % after each stroke, which friction keeps from a sticky
// band: read fast by a fine display, that is no slip, and all four ramps are fitted.
func TestStrokesThatSagAreNoSlips(t *testing.T) {
	for _, k := range []int{2, 3} {
		c := coverCases()[k]
		for seed := range uint64(trials(6)) {
			s := c.scene(seed + 8700)
			r := analyzed(t, s.set)
			for _, step := range r.Steps {
				if step.Kind == MountStep {
					t.Errorf("%s, seed %d: %s", c.name, seed, stepsText(r.Steps))
				}
			}
			if len(r.work.ramps) != 4 {
				t.Errorf("%s, seed %d: %d ramps fitted", c.name, seed, len(r.work.ramps))
			}
		}
	}
}

func TestStickSlipIsNotTakenForTheMount(t *testing.T) {
	for seed := range uint64(trials(6)) {
		b := newBench(seed + 8500)
		b.jumpN = []float64{60, 120, 240}[seed%3] * lbf
		r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
		stuck := 0
		for _, s := range r.Steps {
			if s.Kind == StickSlip {
				stuck++
			} else {
				t.Errorf("%.0f lbf at rest: %s of %.3g m at %.1f s", b.jumpN/lbf, s.Kind, s.SizeM.Value, s.T)
			}
		}
		if b.jumpN > 200*lbf && (stuck < 12 || !warned(r, "stick-slip")) {
			t.Errorf("%.0f lbf at rest: %d jumps", b.jumpN/lbf, stuck)
		}
	}
}

// Steps back on the way up that the low ends know nothing of are the sag of a hand
// pump: the band goes with it. Where the low end has moved too, the mount slipped.
func TestSagIsNoSlipOfTheMount(t *testing.T) {
	for _, c := range []struct {
		name  string
		after float64 // m, low end after the cycle
		kind  StepKind
	}{{"low ends stay", 0, Undone}, {"low end moves by as much", -10e-6, MountStep}} {
		w := &work{res: &Result{}, x: make([]float64, 41), t: make([]float64, 41), e: make([]float64, 41)}
		for i := range w.e {
			w.t[i] = float64(i)
			w.e[i] = 1e-4 * (1 - math.Abs(float64(i-20))/20)
			if i > 20 {
				w.e[i] += c.after
			}
		}
		w.res.Cycles = []Cycle{{Role: Ramp, First: 0, Peak: 20, Last: 40}}
		for _, at := range []int{8, 14} {
			w.res.Steps = append(w.res.Steps, Step{Pair: at, Kind: MountStep, SizeM: estimate.Estimate{Value: -5e-6}})
		}
		w.tellSags()
		for _, s := range w.res.Steps {
			if s.Kind != c.kind {
				t.Errorf("%s: a step is %q, want %q", c.name, s.Kind, c.kind)
			}
		}
	}
}
