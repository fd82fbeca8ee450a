package report

import (
	"math"
	"math/rand/v2"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze"
)

// The invented head rig T-1 with band QW-6 (the project's own invention): two
// cylinders of 2.5 in, W 820 lbf, F0 210 lbf, mu 0.045.
const (
	psi        = 6894.757293168361 // Pa, exact factor rounded to float64
	lbf        = 4.4482216152605   // N, exact
	planF0N    = 210 * lbf
	planMu     = 0.045
	planWN     = 820 * lbf
	planAreaM2 = 2 * math.Pi / 4 * 0.0635 * 0.0635
	planE      = 29e6 * psi
	planL      = 0.508
	planA      = 0.058 * 5.25 * 0.0254 * 0.0254
)

// pulled is a band on a tensioner with dry friction: what it holds stays until
// the setting leaves the range that friction locks.
type pulled struct{ heldN float64 }

// stress is the band's after the pressure has moved to p.
func (b *pulled) stress(p float64) float64 {
	push := p * planAreaM2
	low, high := (push-planF0N)/(1+planMu), (push+planF0N)/(1-planMu)
	b.heldN = min(max(b.heldN, low, planWN), max(high, planWN))
	return (b.heldN - planWN) / (2 * planA)
}

// t1Set is a visit in pairs: a rest with the band slack, one cycle to exercise
// and three ramps up to 860 psi in two minutes each way, seeded noise on both
// channels and an indicator of 0.001 mm. From 20 psi the band is slack at the
// foot of every cycle; from 300 psi it never is.
func t1Set(lowPsi float64) *pairing.Set {
	rng := rand.New(rand.NewPCG(6, 1))
	set := &pairing.Set{Plan: pairing.Plan{Exercise: 1, Ramps: 3}}
	set.Extension.CountSI, set.Setting.CountSI = 1e-6, 0.1*psi
	var band pulled
	now := 0.0
	add := func(settingPsi float64) {
		p := settingPsi * psi
		stretch := band.stress(p) * planL / planE
		set.Pairs = append(set.Pairs, pairing.Pair{
			T: now, Setting: p + 0.4*psi*rng.NormFloat64(),
			Extension: 1e-6 * math.Round((25e-6+stretch+0.4e-6*rng.NormFloat64())/1e-6), SettingStd: 0.05 * psi,
		})
		now += 0.2
	}
	hold := func(settingPsi float64) {
		for range 60 {
			add(settingPsi)
		}
	}
	ramp := func(from, to float64) {
		for i := range 600 {
			add(from + (to-from)*float64(i+1)/600)
		}
	}
	hold(lowPsi)
	for range 4 {
		ramp(lowPsi, 860)
		hold(860)
		ramp(860, lowPsi)
		hold(lowPsi)
	}
	return set
}

func exampleProfile(t testing.TB) *mill.Profile {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// t1 is the analysis of T-1. Each call computes anew, so that a test may change
// its own.
func t1(t testing.TB) *analyze.Result { return analysed(t, t1Set(20)) }

// withoutZero is T-1 ramped from a band that is never slack.
func withoutZero(t testing.TB) *analyze.Result { return analysed(t, t1Set(300)) }

func analysed(t testing.TB, set *pairing.Set) *analyze.Result {
	t.Helper()
	r, err := analyze.Analyze(analyze.Input{Profile: exampleProfile(t), Tensioner: "T-1", Band: "QW-6", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func t1Meta() Meta {
	return Meta{
		File: "/home/mill/quillfern-t1.ramp", Seal: "9f2c41d07be853aa16e0c4b25d7718e2c9034fa1b6e85d20f7a3c1984be6d052", Outcome: "complete",
		Program: "tautramp 0.1", Recorder: "tautramp 0.1", ClockFactor: 1,
		Started: time.Date(2026, 9, 14, 9, 41, 7, 0, time.FixedZone("", -4*3600)),
		Notes:   []string{"device 1: 3 lines lost (3 by its own count), 0 refused, 0 restarts"},
	}
}
