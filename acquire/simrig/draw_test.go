package simrig

import (
	"math/rand/v2"
	"testing"
)

// Drawn mills are healthy and plausible: each can be driven, reaches its
// target within its limit, and its loop at the target is narrow.
func TestDrawnMillsAreHealthy(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	shapes := map[Shape]int{}
	for i := range 60 {
		c, err := Draw(rng)
		if err != nil {
			t.Fatalf("mill %d: %v", i, err)
		}
		shapes[c.Drive.Shape]++
		r := mustNew(t, c)
		truth, stress := r.Truth(), r.conf.workStressPa()
		up, down := truth.RisingPa(stress), truth.FallingPa(stress)
		if half := (up - down) / 2 / up; half < 0.004 || half > 0.03 {
			t.Errorf("mill %d: half-width %.2f %% of the working setting", i, 100*half)
		}
		if up < 200*psiPa || up > 1200*psiPa || r.conf.Drive.TopPa < 1.05*up {
			t.Errorf("mill %d: works at %.0f psi, is driven to %.0f", i, up/psiPa, r.conf.Drive.TopPa/psiPa)
		}
		if i%10 != 0 {
			continue
		}
		trace, err := r.Trace(0.1)
		if err != nil {
			t.Fatal(err)
		}
		if at := crossings(trace, truth.PullN(stress), true); len(at) == 0 {
			t.Errorf("mill %d never reaches its target", i)
		}
	}
	if len(shapes) != 3 {
		t.Errorf("drives %v", shapes)
	}
}

func TestDrawIsTheSamePerSeed(t *testing.T) {
	draw := func() Config {
		c, err := Draw(rand.New(rand.NewPCG(3, 4)))
		if err != nil {
			t.Fatal(err)
		}
		return c
	}
	a, b := mustNew(t, draw()), mustNew(t, draw())
	if a.Truth().RisingPa(60e6) != b.Truth().RisingPa(60e6) || a.conf.Seed != b.conf.Seed {
		t.Error("one source, two mills")
	}
}
