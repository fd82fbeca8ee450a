package findings_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"tautramp/acquire/simrig"
	"tautramp/analyze/findings"
)

// inPairs is the kinds that are planted two at a time: those that leave enough of
// the recording for another to be seen.
func inPairs() []simrig.FaultKind {
	return []simrig.FaultKind{simrig.ConstantFriction, simrig.LeakDown, simrig.MountCreep, simrig.WheelDrag, simrig.EndStop, simrig.StickyGauge, simrig.GaugeZero, simrig.RigWarming, simrig.TooFewCycles}
}

// excluded are pairs that one recording cannot show both of: two drifts, too few
// ramps for a drift, and a leak behind a gauge that stands until it is off by more
// than the leak takes in a hold.
func excluded(a, b simrig.FaultKind) bool {
	drifts := map[simrig.FaultKind]bool{simrig.MountCreep: true, simrig.RigWarming: true}
	few := a == simrig.TooFewCycles || b == simrig.TooFewCycles
	hidden := a == simrig.LeakDown && b == simrig.StickyGauge || a == simrig.StickyGauge && b == simrig.LeakDown
	return a == b || hidden || drifts[a] && drifts[b] || few && (drifts[a] || drifts[b])
}

func kindOf(k simrig.FaultKind) planting {
	for _, p := range plantings() {
		if p.kind == k {
			return p
		}
	}
	panic("no planting of " + string(k))
}

// paired is a rig with two causes; not ok where they cannot be planted together.
func paired(t *testing.T, u doubts, seed, stream uint64) (s *subject, a, b planting, ok bool) {
	t.Helper()
	s, err := draw(seed, stream^0x9a1)
	if err != nil {
		t.Fatal(err)
	}
	kinds := inPairs()
	a, b = kindOf(kinds[s.rng.IntN(len(kinds))]), kindOf(kinds[s.rng.IntN(len(kinds))])
	if excluded(a.kind, b.kind) {
		return s, a, b, false
	}
	okA, errA := a.plant(s, u, severity(s))
	okB, errB := b.plant(s, u, severity(s))
	return s, a, b, okA && okB && errA == nil && errB == nil
}

// runPairs plants two causes at once.
func runPairs(t *testing.T, u doubts, rigs int, stream uint64) string {
	t.Helper()
	both, n := 0, 0
	missed := map[string]int{}
	for seed := uint64(0); n < rigs && seed < uint64(10*rigs); seed++ {
		s, a, b, ok := paired(t, u, seed, stream)
		if !ok {
			continue
		}
		rep, err := look(s.c)
		if err != nil {
			continue
		}
		n++
		seen := map[findings.Key]bool{}
		for _, f := range rep.Findings {
			for _, c := range f.Causes {
				seen[c.Key] = true
			}
		}
		if seen[a.cause] && seen[b.cause] {
			both++
			continue
		}
		missed[fmt.Sprintf("%s with %s", a.kind, b.kind)]++
		if flagText("loud") == "true" {
			fmt.Println("pair missed", seed, a.kind, b.kind, s.c.Drive.Shape, s.countM, seen)
		}
	}
	return fmt.Sprintf("%d pairs of faults: both named in %s", n, share(both, n))
}

// class is the findings of one class of certainty.
type class struct {
	from, to   float64
	said       float64 // sum of their certainties
	n, correct int
}

// mixed is one rig of the mix: one in five healthy, the others with one cause each,
// all kinds alike, at 0.3 to 1.5 times the noticeable severity: faults that are hardly
// seen, which certainty is for.
func mixed(t *testing.T, u doubts, seed int, stream uint64) (s *subject, cause findings.Key, ok bool) {
	t.Helper()
	pick := rand.New(rand.NewPCG(uint64(seed), stream^0xca2))
	all := plantings()
	p := all[pick.IntN(len(all))]
	s, err := drawSetBy(uint64(seed), stream^0xca1, p.setBy())
	if err != nil {
		t.Fatal(err)
	}
	if pick.Float64() < 0.2 {
		return s, "", true
	}
	ok, err = p.plant(s, u, 0.3*math.Exp(s.rng.Float64()*math.Log(5)))
	return s, p.cause, ok && err == nil
}

// runCalibration counts, in each class of certainty, how many findings of a mix
// were right.
func runCalibration(t *testing.T, u doubts, rigs int, stream uint64) string {
	t.Helper()
	classes := []class{{from: 0.5, to: 0.85}, {from: 0.85, to: 0.95}, {from: 0.95, to: 1.01}}
	loud := flagText("loud") == "true"
	for seed := range rigs {
		if seed > 0 && seed%500 == 0 {
			fmt.Println("so far:", calibration(seed, classes))
		}
		s, cause, ok := mixed(t, u, seed, stream)
		if !ok {
			continue
		}
		rep, err := look(s.c)
		if err != nil {
			continue
		}
		for _, f := range rep.Findings {
			if loud {
				fmt.Printf("mix %d %.5f %t %s planted %q\n", seed, f.Certainty, has(f, cause), f.Key, cause)
			}
			for k := range classes {
				c := &classes[k]
				if f.Certainty >= c.from && f.Certainty < c.to {
					c.n++
					c.said += f.Certainty
					if has(f, cause) {
						c.correct++
					}
				}
			}
		}
	}
	return calibration(rigs, classes)
}

func calibration(rigs int, classes []class) string {
	var out strings.Builder
	fmt.Fprintf(&out, "certainty on a mix of %d rigs:\n", rigs)
	for _, c := range classes {
		fmt.Fprintf(&out, "  %.2f to %.2f: %d findings, said %.3f, right %s\n", c.from, math.Min(c.to, 1), c.n, c.said/math.Max(1, float64(c.n)), share(c.correct, c.n))
	}
	return out.String()
}

// TestMixture counts the classes of certainty alone; -rigs as for TestConfusion,
// thirty-five of them for each.
func TestMixture(t *testing.T) {
	rigs := 0
	fmt.Sscan(flagText("rigs"), &rigs)
	if rigs == 0 {
		t.Skip("-rigs N counts the classes of certainty")
	}
	fmt.Println(runCalibration(t, usualDoubts(), 35*rigs, streamOf()))
	fmt.Println(runPairs(t, usualDoubts(), rigs, streamOf()))
}
