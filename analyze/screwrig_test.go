package analyze_test

import (
	"fmt"
	"math"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/simrig"
	"tautramp/acquire/simrig/rigtest"
	"tautramp/analyze"
)

// turnedRig rehearses T-2 with QN-17, set by whatever is said.
func turnedRig(t testing.TB, by mill.SetBy, limitSI float64, c simrig.Config) (*analyze.Result, simrig.Truth) {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	p.Tensioners[1].SetBy = by
	if limitSI > 0 {
		p.Tensioners[1].SettingLimit.SI = limitSI
	}
	c.Profile, c.Tensioner, c.Band = p, "T-2", "QN-17"
	set, truth, err := rigtest.Set(c)
	if err != nil {
		t.Fatal(err)
	}
	r, err := analyze.Analyze(analyze.Input{Profile: p, Tensioner: "T-2", Band: "QN-17", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	return r, truth
}

const target = 14000 * psi

// What was planted in the invented T-2 must lie within the intervals, greased and
// dry, however the wrench is pulled.
func TestRehearsedScrewIsRecovered(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	for _, shape := range []simrig.Shape{simrig.Smooth, simrig.Strokes, simrig.Stairs} {
		for _, dry := range []bool{false, true} {
			t.Run(fmt.Sprintf("%s, dry %v", shape, dry), func(t *testing.T) {
				c := simrig.Config{Seed: 11, Drive: simrig.Drive{Shape: shape}}
				if dry {
					c.Screw = simrig.Screw{MoreThread: 0.10, MoreCollar: 0.03}
				}
				r, truth := turnedRig(t, mill.SetByTorque, 0, c)
				up, down := truth.TorqueNM(target, true), -truth.TorqueNM(target, false)
				s := r.Screw
				holds(t, "raising torque", r.AtRising.TrueSI, up)
				holds(t, "loosening torque", r.AtFalling.TrueSI, down)
				holds(t, "friction of the thread", s.ThreadMu, truth.Screw.ThreadMu)
				holds(t, "rest torque", s.RestNm, truth.Screw.RestNM)
				holds(t, "lead", s.LeadRatio, 1)
				holds(t, "efficiency", s.Efficiency, truth.PullN(target)*truth.Screw.LeadM/(2*math.Pi*up))
				holds(t, "torque of friction", s.FrictionNm, (up+down)/2)
				near(t, "raising torque", r.AtRising.TrueSI.Value, up, 0.02)
				near(t, "loosening torque", r.AtFalling.TrueSI.Value, down, 0.03)
				if s.Opposed != true || len(r.Cycles) != 4 {
					t.Errorf("opposed %v, %d cycles", s.Opposed, len(r.Cycles))
				}
			})
		}
	}
}
