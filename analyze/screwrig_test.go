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

// Set by turns, what gives beside the band and what is lost at a reversal must
// come out as planted: springs of 1.2 kN/mm, frame and tyres of 8.57 kN/mm, 18
// degrees of play.
func TestRehearsedTurnsAreRecovered(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	r, truth := turnedRig(t, mill.SetByTurns, 8*2*math.Pi, simrig.Config{Seed: 12})
	holds(t, "turn at the target, rising", r.AtRising.TrueSI, truth.TurnRad(target, true))
	holds(t, "turn at the target, falling", r.AtFalling.TrueSI, truth.TurnRad(target, false))
	near(t, "turn at the target, rising", r.AtRising.TrueSI.Value, truth.TurnRad(target, true), 0.01)
	c := r.Chain
	planted := 1 / (1/1.2e6 + 1/8.57e6)
	holds(t, "stiffness of what gives", c.GiveNM, planted)
	near(t, "stiffness of what gives", c.GiveNM.Value, planted, 0.05)
	holds(t, "lost turn", c.LostRad, truth.TurnRad(target, true)-truth.TurnRad(target, false))
	near(t, "lost turn", c.LostRad.Value, 18*math.Pi/180, 0.05)
	holds(t, "lost turn without a pull", c.LostIdle, 18*math.Pi/180)
	near(t, "band stress for each turn, of the free one", c.PerRadPa.Value/c.FreePa.Value, 1-c.GiveM.Value/c.TravelM, 0.01)
	// The profile says 1.2, 20 and 15 kN/mm in series.
	near(t, "expected", c.Expected.Value, 1/(1/1.2e6+1/20e6+1/15e6), 1e-12)
	if r.Grade != analyze.Inconclusive || r.Screw.ThreadMu.Known() || r.Springs.RateNM.Known() || r.Friction.Mu.Known() {
		t.Errorf("grade %q, screw %+v, springs %+v", r.Grade, r.Screw, r.Springs)
	}
}

// A spring that gets shorter under load must be measured as one: its rate, and no
// friction where none was planted.
func TestRehearsedSpringIsRecovered(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	r, truth := turnedRig(t, mill.SetBySpring, 68e-3, simrig.Config{Seed: 13})
	for d, at := range map[bool]analyze.TargetSetting{true: r.AtRising, false: r.AtFalling} {
		shorter := 80e-3 - truth.Setting(target, d)
		holds(t, "shorter at the target", at.TrueSI, shorter)
		near(t, "shorter at the target", at.TrueSI.Value, shorter, 0.02)
	}
	holds(t, "rate", r.Springs.RateNM, 1.2e6)
	near(t, "rate", r.Springs.RateNM.Value, 1.2e6, 0.02)
	holds(t, "rate, of the profile's", r.Springs.Ratio, 1)
	holds(t, "mu", r.Friction.Mu, 0)
	holds(t, "F0", r.Friction.F0N, 0)
	near(t, "left before binding", r.Springs.LeftSI.Value, 12e-3-(80e-3-truth.Setting(target, true)), 0.05)
	if r.Springs.BoundSI.Known() || r.Setup.LimitSI < 0.0119 || r.Setup.LimitSI > 0.0121 {
		t.Errorf("bound at %+v, limit %g", r.Springs.BoundSI, r.Setup.LimitSI)
	}
}

// Friction within the stack turns the loop the other way, and coils that touch
// show where they do.
func TestRehearsedSpringsThatRubAndBind(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates whole visits")
	}
	rubbing, _ := turnedRig(t, mill.SetBySpring, 66e-3, simrig.Config{Seed: 14, Screw: simrig.Screw{StackMu: 0.04}})
	holds(t, "friction of the stack", rubbing.Friction.Mu, -0.04)
	near(t, "friction of the stack", rubbing.Friction.Mu.Value, -0.04, 0.1)
	if rubbing.ResetSI.Known() || rubbing.Running.AfterRisingPa[1].Known() || rubbing.Grade == analyze.Good {
		t.Errorf("drop to %+v, grade %q", rubbing.ResetSI, rubbing.Grade)
	}
	binding, truth := turnedRig(t, mill.SetByTurns, 8*2*math.Pi, simrig.Config{Seed: 15, Screw: simrig.Screw{BindPart: 0.9}})
	at := truth.TurnRad(0.9*1.22*target, true)
	if b := binding.Chain.BoundRad; !b.Known() || math.Abs(b.Value/at-1) > 0.03 {
		t.Errorf("bound at %+v, want %.4g rad", b, at)
	}
	if free, _ := turnedRig(t, mill.SetByTurns, 8*2*math.Pi, simrig.Config{Seed: 16}); free.Chain.BoundRad.Known() {
		t.Errorf("springs that are free are bound at %+v", free.Chain.BoundRad)
	}
}
