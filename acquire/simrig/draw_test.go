package simrig

import (
	"math/rand/v2"
	"testing"

	"tautramp/acquire/mill"
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

func TestDrawnScrewsAreHealthy(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	for i := range 12 {
		by := []mill.SetBy{mill.SetByTorque, mill.SetByTurns, mill.SetBySpring}[i%3]
		c, err := DrawSetBy(rng, by)
		if err != nil {
			t.Fatalf("mill %d set by %s: %v", i, by, err)
		}
		c.Drive.Shape = Smooth
		r := mustNew(t, c)
		trace, err := r.Trace(0.1)
		if err != nil {
			t.Fatal(err)
		}
		truth, stress := r.Truth(), r.conf.workStressPa()
		up, down := torqueAt(trace, truth.PullN(stress), true), torqueAt(trace, truth.PullN(stress), false)
		near(t, "torque up", up, truth.TorqueNM(stress, true), 0.02*up)
		if down >= 0 {
			t.Errorf("mill %d: loosening takes %.2f N m: the screw does not hold by itself", i, down)
		}
		near(t, "turns up", turnAt(trace, truth.PullN(stress), true), truth.TurnRad(stress, true), 0.02*truth.TurnRad(stress, true))
	}
}

func TestDrawnFaultsKeepToTheirSizes(t *testing.T) {
	rng := rand.New(rand.NewPCG(31, 32))
	for _, row := range Faults() {
		low, high := row.To, row.From
		for range 100 {
			f := row.Draw(rng)
			low, high = min(low, f.Size), max(high, f.Size)
		}
		if low < row.From || high > row.To || high-low < 0.5*(row.To-row.From) {
			t.Errorf("%s: %g to %g of %g to %g", row.Kind, low, high, row.From, row.To)
		}
	}
}
