package analyze

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
	"tautramp/protocol"
)

func roles(r *Result) []Role {
	var out []Role
	for _, c := range r.Cycles {
		out = append(out, c.Role)
	}
	return out
}

func TestRolesOfCycles(t *testing.T) {
	for _, c := range []struct {
		name    string
		plan    pairing.Plan
		cycles  int
		cut     float64 // share of the last cycle that is missing
		want    []Role
		warning string
	}{
		{"as planned", pairing.Plan{Exercise: 1, Ramps: 2}, 3, 0, []Role{Exercise, Ramp, Ramp}, "two-cycles"},
		{"no exercise planned", pairing.Plan{Ramps: 2}, 2, 0, []Role{Ramp, Ramp}, "two-cycles"},
		{"no exercise, as many ramps as there are", pairing.Plan{}, 2, 0, []Role{Ramp, Ramp}, "two-cycles"},
		{"exercise, as many ramps as there are", pairing.Plan{Exercise: 1}, 3, 0, []Role{Exercise, Ramp, Ramp}, "two-cycles"},
		{"no exercise and one cycle", pairing.Plan{}, 1, 0, []Role{Ramp}, "one-cycle"},
		{"cut off in the last rise", pairing.Plan{Exercise: 1, Ramps: 2}, 3, 0.7, []Role{Exercise, Ramp, Incomplete}, "incomplete-cycle"},
		{"cut off at the start of the last fall", pairing.Plan{Exercise: 1, Ramps: 2}, 3, 0.3, []Role{Exercise, Ramp, Incomplete}, "incomplete-cycle"},
	} {
		t.Run(c.name, func(t *testing.T) {
			b := newBench(31)
			b.plan = c.plan
			h := cycles(smooth, c.cycles, 0, 860)
			last := h.begins[len(h.begins)-1]
			keep := len(h.p) - int(c.cut*float64(len(h.p)-last))
			h.t, h.p = h.t[:keep], h.p[:keep]
			r := analyzed(t, b.measure(h))
			if got := roles(r); !slices.Equal(got, c.want) {
				t.Fatalf("%v, want %v", got, c.want)
			}
			if !warned(r, c.warning) {
				t.Errorf("no %q among %v", c.warning, r.Warnings)
			}
			for i, cycle := range r.Cycles {
				if fitted := cycle.Rising.Points > 0 || cycle.Falling.Points > 0; fitted != (cycle.Role == Ramp) {
					t.Errorf("cycle %d is %s, fitted: %v", i, cycle.Role, fitted)
				}
			}
			for i, pt := range r.Points {
				if pt.Fitted && r.Cycles[pt.Cycle].Role != Ramp {
					t.Fatalf("pair %d of a cycle that is %s was fitted", i, r.Cycles[pt.Cycle].Role)
				}
			}
		})
	}
}

func TestWigglesAreNoCycles(t *testing.T) {
	b := newBench(32)
	h := &path{}
	h.add(0)
	for range 3 {
		h.to(500*psi, 8*psi)
		h.to(420*psi, 8*psi) // a second thought, 9 % of the rise
		h.to(860*psi, 8*psi)
		h.to(300*psi, 8*psi)
		h.to(350*psi, 8*psi)
		h.to(0, 8*psi)
		h.hold(3)
	}
	r := analyzed(t, b.measure(h))
	if len(r.Cycles) != 3 {
		t.Fatalf("%d cycles, want 3", len(r.Cycles))
	}
	near(t, "rising setting, psi", r.AtRising.TrueSI.Value/psi, 724.5, 0.01)
	near(t, "falling setting, psi", r.AtFalling.TrueSI.Value/psi, 621.2, 0.01)
}

func TestPhasesFollowOneAnother(t *testing.T) {
	b := newBench(33)
	h := cycles(smooth, 4, 0, 860)
	r := analyzed(t, b.measure(h))
	seen := map[PhaseKind]int{}
	for _, pt := range r.Points {
		seen[pt.Phase]++
	}
	for _, k := range []PhaseKind{Resting, SlackLift, Seating, Loading, Holding, Unloading, Inside} {
		if seen[k] < 10 {
			t.Errorf("%s: %d pairs", k, seen[k])
		}
	}
	for i, pt := range r.Points {
		if pt.Cycle < 1 {
			continue
		}
		switch pt.Phase {
		case Loading:
			// The smoothed setting decides, not a reading's own.
			if pt.SettingSI < r.Cycles[pt.Cycle].SeatingEndSI-5*psi || i > r.Cycles[pt.Cycle].Peak {
				t.Fatalf("loading at %.0f psi", pt.SettingSI/psi)
			}
		case Unloading:
			// The reversal at the top is left out: it ends at 860 - 112 psi.
			if i < r.Cycles[pt.Cycle].Peak || pt.SettingSI > 750*psi {
				t.Fatalf("unloading at %.0f psi", pt.SettingSI/psi)
			}
		case Resting, SlackLift:
			if math.Abs(pt.Stress) > 200*psi {
				t.Fatalf("slack at a band stress of %.0f psi", pt.Stress/psi)
			}
		}
		if pt.Fitted != (pt.Phase == Loading || pt.Phase == Unloading) {
			t.Fatalf("pair %d: phase %s, fitted %v", i, pt.Phase, pt.Fitted)
		}
	}
	for _, c := range r.Cycles[1:] {
		near(t, "reversal length, psi", c.ReversalSI.Value/psi, 114.5, 0.03)
		near(t, "rate, psi/s", c.RateSI/psi, 8, 0.2)
	}
}

func TestToeDoesNotMoveTheSlope(t *testing.T) {
	slope := func(toePa float64) float64 {
		b := newBench(34)
		b.toePa = toePa
		return analyzed(t, b.measure(cycles(smooth, 4, 0, 860))).Rising.Slope.Value
	}
	near(t, "slope with a toe", slope(150*psi), slope(0), 0.005)
}

func TestTooLittleIsAnError(t *testing.T) {
	good := newBench(35).measure(cycles(smooth, 2, 0, 860))
	with := func(change func(s *pairing.Set)) *pairing.Set {
		s := *good
		s.Pairs = slices.Clone(good.Pairs)
		s.Setting.Readings = nil
		change(&s)
		return &s
	}
	rise := with(func(s *pairing.Set) { s.Pairs = s.Pairs[:len(s.Pairs)/8] })
	for _, c := range []struct {
		name string
		set  *pairing.Set
		want error
	}{
		{"no set", nil, ErrTooFewPairs},
		{"no pair", with(func(s *pairing.Set) { s.Pairs = nil }), ErrTooFewPairs},
		{"one pair", with(func(s *pairing.Set) { s.Pairs = s.Pairs[:1] }), ErrTooFewPairs},
		{"a rise only", rise, ErrNoCycle},
		{"constant", with(func(s *pairing.Set) {
			for i := range s.Pairs {
				s.Pairs[i].Setting, s.Pairs[i].Extension = 5e6, 1e-4
			}
		}), ErrNoCycle},
		{"extension that stands still", with(func(s *pairing.Set) {
			for i := range s.Pairs {
				s.Pairs[i].Extension = 1e-4
			}
		}), ErrNoCycle},
		{"extension that goes the wrong way", with(func(s *pairing.Set) {
			for i := range s.Pairs {
				s.Pairs[i].Extension *= -1
			}
		}), ErrNoCycle},
		{"not a number", with(func(s *pairing.Set) { s.Pairs[50].Setting = math.NaN() }), estimate.ErrBadValue},
		{"time runs back", with(func(s *pairing.Set) { s.Pairs[50].T = 0 }), estimate.ErrBadValue},
		{"exercise only", with(func(s *pairing.Set) { s.Plan = pairing.Plan{Exercise: 2, Ramps: 3} }), ErrNoCycle},
	} {
		r, err := Analyze(Input{Profile: profile(t), Tensioner: "T-1", Band: "QW-6", Set: c.set})
		if !errors.Is(err, c.want) || r != nil {
			t.Errorf("%s: %v, want %v", c.name, err, c.want)
		}
	}
	for _, in := range []Input{
		{Profile: profile(t), Tensioner: "T-9", Band: "QW-6", Set: good},
		{Profile: profile(t), Tensioner: "T-1", Band: "", Set: good},
		{Set: good},
	} {
		if _, err := Analyze(in); !errors.Is(err, mill.ErrUnknownName) {
			t.Errorf("names %q %q: %v", in.Tensioner, in.Band, err)
		}
	}
	if _, err := new(Result).StressAt(Rising, 1); !errors.Is(err, ErrNoCycle) {
		t.Errorf("stress of an empty result: %v", err)
	}
}

func TestAnyPairsGiveAResultOrAnError(t *testing.T) {
	trials := 300
	if testing.Short() {
		trials = 60
	}
	p := profile(t)
	results := 0
	for seed := range uint64(trials) {
		r := rand.New(rand.NewPCG(seed, 99))
		set := &pairing.Set{Plan: pairing.Plan{Exercise: r.IntN(2), Ramps: r.IntN(3)}}
		set.Extension.CountSI = []float64{0, 1e-6, 1e-5}[r.IntN(3)]
		n := 10 + r.IntN(400)
		t0, level, part := 0.0, 0.0, 0
		for range n {
			t0 += []float64{0, 0.1, 5}[r.IntN(3)]
			level += r.NormFloat64() * []float64{0, 1e5, 1e6}[r.IntN(3)]
			if r.IntN(50) == 0 {
				part++
			}
			set.Pairs = append(set.Pairs, pairing.Pair{T: t0, Setting: level, Part: part,
				Extension: level*2.5e-11*float64(r.IntN(2)) + 1e-6*r.NormFloat64()})
			set.Setting.Readings = append(set.Setting.Readings, pairing.Reading{T: t0, Value: level, Status: protocol.Good},
				pairing.Reading{T: t0, Value: level, Status: protocol.Good})
		}
		set.Marks = []pairing.Mark{{T: t0 / 2, Kind: pairing.Zero}}
		res, err := Analyze(Input{Profile: p, Tensioner: []string{"T-1", "T-2"}[r.IntN(2)], Band: "QW-6", Set: set})
		if err == nil {
			results++
			if len(res.Points) != n {
				t.Fatalf("seed %d: %d points of %d pairs", seed, len(res.Points), n)
			}
		}
	}
	t.Logf("%d of %d gave a result", results, trials)
}

func TestTorqueSetTensionerHasNoForceBalanceYet(t *testing.T) {
	set := newBench(36).measure(cycles(smooth, 3, 0, 860))
	r, err := Analyze(Input{Profile: profile(t), Tensioner: "T-2", Band: "QW-6", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	if r.Friction.F0N.Known() || r.Friction.F0N.Why == "" || r.Friction.AreaRatio.Known() {
		t.Errorf("%+v", r.Friction)
	}
	if !r.AtRising.TrueSI.Known() || !r.WidthRatio.Known() {
		t.Error("branches and width need no force balance")
	}
}

func TestMissingInstrumentsAreSaid(t *testing.T) {
	p := profile(t)
	p.Instruments = nil
	r, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: newBench(37).measure(cycles(smooth, 3, 0, 860))})
	if err != nil {
		t.Fatal(err)
	}
	for _, code := range []string{"no-setting-instrument", "no-extension-instrument", "one-face"} {
		if !warned(r, code) {
			t.Errorf("no %q among %v", code, r.Warnings)
		}
	}
}
