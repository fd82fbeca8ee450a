package estimate

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"
)

// The setting for a target by one ramp alone: how often its interval holds the
// truth, by each of the three ways.
func TestInverseOfOneRampHoldsTheTruth(t *testing.T) {
	for _, c := range []struct {
		name string
		ramped
		least float64 // of 95 %: no noise gives a set that always holds it
		most  float64
		want  string
	}{
		{"0.0005 in, much noise", ramped{count: 47, noise: 2.4, step: 0.8}, 0.93, 0.97, "one ramp, profile likelihood"},
		{"0.0005 in, much slow noise", ramped{count: 47, noise: 2.4, step: 0.8, rho: 0.8}, 0.92, 0.98, "one ramp, profile likelihood"},
		{"0.0005 in, as much noise as a step", ramped{count: 47, noise: 0.8, step: 0.8}, 0.93, 0.97, "one ramp, Fieller's interval of its line"},
		{"0.0005 in, no noise", ramped{count: 47, step: 2.7}, 0.999, 1, "one ramp, all lines through its readings"},
		{"fine", ramped{count: 1, noise: 2.4, step: 0.8}, 0.93, 0.97, "one ramp, Fieller's interval of its line"},
	} {
		n, hits := trials(32), 0
		r := rand.New(rand.NewPCG(2, uint64(c.noise*1000+c.count)))
		how := map[string]int{}
		for range n {
			d, a, b := c.draw(r)
			c.state(&d, 0.9)
			y := a + b*rampTarget
			e, err := InverseOf(d, y)
			if err != nil {
				t.Fatalf("%s: %v", c.name, err)
			}
			how[e.Method]++
			if half := Student95(e.DoF) * e.Random; math.Abs(e.Value-rampTarget) <= half {
				hits++
			}
		}
		p := float64(hits) / float64(n)
		t.Logf("%-36s %.3f of %d, %v", c.name, p, n, how)
		if p < c.least-chance(c.least, n) || p > c.most+chance(c.most, n) {
			t.Errorf("%s: the truth lies inside in %.1f %% of %d, want %.1f to %.1f", c.name, 100*p, n, 100*c.least, 100*c.most)
		}
		if how[c.want] < n/2 {
			t.Errorf("%s: %v", c.name, how)
		}
	}
}

func TestInverseOfNothingIsRefused(t *testing.T) {
	if _, err := InverseOf(Readings{X: []float64{1, 1, 1}, Lo: []float64{0, 0, 0}, Hi: []float64{1, 1, 1}}, 0.5); !errors.Is(err, ErrNoSpread) {
		t.Error(err)
	}
}
