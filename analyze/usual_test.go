package analyze

import (
	"flag"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"tautramp/analyze/estimate"
)

var writeTable = flag.Bool("table", false, "make the tables of testdata anew")

// usualRig is a rig with a 0.0005 in indicator on T-1, for the comparison with
// the usual way. Everything is pinned: 8 psi/s, transducer with 1 psi of noise
// 50 times a second, indicator 10 times a second, 1e-7 m of noise before it
// rounds, where its counts lie drawn for each rig.
func usualRig(seed uint64, scatter, wander float64) *bench {
	b := newBench(seed)
	b.countM = 0.0005 * inch
	b.zeroM += b.countM * b.rng.Float64()
	b.codeScatter, b.wanderArea = scatter, wander
	return b
}

// usualWay is how it is done with paper: five settings from 260 to 860 psi, each
// come up to from below and held for ten seconds, twice over after an exercise;
// at each the gauge (the mean of a second) and the indicator are read, the two
// readings averaged, and a straight line laid through by least squares. The
// zero is given it, as it is to the other.
func usualWay(b *bench, targetM float64) (settingSI float64, err error) {
	settings := []float64{260, 410, 560, 710, 860}
	h := &path{}
	h.add(20 * psi)
	h.hold(5)
	h.begins = append(h.begins, len(h.p))
	h.to(860*psi, 8*psi)
	h.to(20*psi, 8*psi)
	var at []float64
	for range 2 {
		h.begins = append(h.begins, len(h.p))
		for _, p := range settings {
			h.to(p*psi, 8*psi)
			h.hold(10)
			at = append(at, h.t[len(h.t)-1])
		}
		h.to(20*psi, 8*psi)
	}
	set := b.measure(h)
	n := len(settings)
	x, y := make([]float64, n), make([]float64, n)
	for k, t := range at {
		var gauge []float64
		for _, r := range set.Setting.Readings {
			if r.T > t-1 && r.T <= t {
				gauge = append(gauge, r.Value)
			}
		}
		shown := 0.0
		for _, q := range set.Pairs {
			if q.T <= t {
				shown = q.Extension
			}
		}
		mean, _ := estimate.Mean(gauge)
		x[k%n] += mean / 2
		y[k%n] += shown / 2
	}
	l, err := estimate.FitLine(x, y)
	if err != nil {
		return 0, err
	}
	settingSI, _ = l.InverseAt(targetM)
	return settingSI, nil
}

// against is the errors of the setting for the target, as shares of it, of both
// ways on the same rigs.
func against(t *testing.T, n int, seed uint64, scatter, wander float64) (ours, usual []float64) {
	for k := range uint64(n) {
		b := usualRig(seed+k, scatter, wander)
		truth := b.settingAt(Rising, 9500*psi)
		targetM := b.zeroM + 9500*psi*b.gaugeM/b.modulusPa
		r := analyzed(t, b.measure(cycles(smooth, 4, 20, 860)))
		sum, ramps := 0.0, 0.0
		for _, i := range r.work.fitted {
			x, _ := r.Cycles[i].Rising.Line.InverseAt(targetM)
			sum, ramps = sum+x, ramps+1
		}
		ours = append(ours, sum/ramps/truth-1)
		b.loadN = 0
		by, err := usualWay(b, targetM)
		if err != nil {
			t.Fatal(err)
		}
		usual = append(usual, by/truth-1)
	}
	return ours, usual
}

func rms(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return math.Sqrt(sum / float64(len(v)))
}

const usualSeed, usualRigs = 61000, 200 // no other test draws these

// TestTableAgainstTheUsualWay writes testdata/usualway.txt with -table, and
// draws few rigs else: at least 10 times better with ideal codes and no
// variation, 3 times with 0.1 count of scatter and 0.3 % from ramp to ramp, bias
// below 0.1 %.
func TestTableAgainstTheUsualWay(t *testing.T) {
	n := trials(12)
	if *writeTable {
		n = usualRigs
	}
	var text strings.Builder
	fmt.Fprintf(&text, `Error of the rising setting for 9,500 psi on T-1 with a 0.0005 in indicator (47 psi
of setting a count), by this program and by the usual way, on the same rigs.

  go test ./analyze -run TestTableAgainstTheUsualWay -table -timeout 30m

%d rigs a row, seeds %d and on; where the counts lie is drawn for each. Ours: one
exercise cycle and three ramps from 20 to 860 psi at 8 psi/s, the mean of the three
rising lines. The usual way: an exercise cycle, then twice over five settings (260,
410, 560, 710, 860 psi), each come up to from below and held for 10 s; gauge (mean
of a second) and indicator read, both readings averaged, a line by least squares. Gauge noise 1 psi at 50/s, indicator 10/s with 1e-7 m of noise before it
rounds. Both are given the zero: a slack band read on such an indicator leaves it
open by a count, whichever way is used.

codes                    ramp to ramp   ours: RMS    bias   usual: RMS    bias   usual / ours
`, n, usualSeed)
	for _, c := range []struct {
		name            string
		scatter, wander float64
		times           float64
	}{
		{"ideal", 0, 0, 10},
		{"0.1 count of scatter", 0.1, 0.003, 3},
	} {
		ours, usual := against(t, n, usualSeed, c.scatter, c.wander)
		bias, sd := estimate.Mean(ours)
		theirs, _ := estimate.Mean(usual)
		ratio := rms(usual) / rms(ours)
		fmt.Fprintf(&text, "%-24s %8.1f %%   %8.3f %% %+.3f %%  %8.3f %% %+.3f %%   %8.1f\n", c.name, 100*c.wander, 100*rms(ours), 100*bias, 100*rms(usual), 100*theirs, ratio)
		chance := 1 - 3.7/math.Sqrt(2*float64(n))*math.Sqrt2
		if ratio < c.times*math.Max(0.3, chance) {
			t.Errorf("%s: %.1f times better than the usual way in %d rigs, want %v", c.name, ratio, n, c.times)
		}
		if math.Abs(bias) > 0.001+3.7*sd/math.Sqrt(float64(n)) {
			t.Errorf("%s: bias %+.3f %%", c.name, 100*bias)
		}
	}
	t.Log("\n" + text.String())
	if *writeTable {
		if err := os.WriteFile("testdata/usualway.txt", []byte(text.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}
