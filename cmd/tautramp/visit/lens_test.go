package visit

import (
	"math"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/simrig"
	"tautramp/acquire/simrig/rigtest"
	"tautramp/protocol"
)

func exampleT2(t *testing.T) (*mill.Profile, mill.Tensioner) {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	return p, p.Tensioners[1]
}

// Through the lens a torque must rise while the wheel pull rises and fall while
// it falls, whether it is let go or not.
func TestTorqueThroughTheLensFollowsTheLoad(t *testing.T) {
	for _, shape := range []simrig.Shape{simrig.Smooth, simrig.Strokes, simrig.Stairs} {
		p, t2 := exampleT2(t)
		set, _, err := rigtest.Set(simrig.Config{Profile: p, Tensioner: "T-2", Band: "QN-17", Seed: 21, Drive: simrig.Drive{Shape: shape, Exercise: -1, Ramps: 1}})
		if err != nil {
			t.Fatal(err)
		}
		top := 0
		for i, q := range set.Pairs {
			if q.Extension > set.Pairs[top].Extension {
				top = i
			}
		}
		l := newLens(t2)
		was, sagged, rose := 0.0, 0.0, 0.0
		fallen := math.Inf(1)
		for i, q := range set.Pairs {
			v := l.pair(q).Setting
			if i < top {
				sagged = max(sagged, was-v)
				was = max(was, v)
			} else if q.T > set.Pairs[top].T+15 { // the loosening torque has come up
				rose = max(rose, v-fallen)
				fallen = min(fallen, v)
			}
		}
		if was < 20 || sagged > 3 || rose > 1.5 || fallen > 1 {
			t.Errorf("%s: up to %.1f N m with %.1f back, down to %.1f with %.1f back", shape, was, sagged, fallen, rose)
		}
	}
}

// A spring that gets shorter counts up, and the end of its scale that stops
// somebody is the lower one.
func TestSpringThroughTheLensCountsUp(t *testing.T) {
	_, t2 := exampleT2(t)
	t2.SetBy = mill.SetBySpring
	l := newLens(t2)
	if got := l.pair(pairing.Pair{Setting: 0.073}).Setting; math.Abs(got-0.007) > 1e-12 {
		t.Errorf("73 mm of 80 mm is %g m", got)
	}
	if got := l.reading(pairing.Reading{Value: 0.060, Status: protocol.Low}); got.Status != protocol.High || math.Abs(got.Value-0.020) > 1e-12 {
		t.Errorf("the short end reads %+v", got)
	}
}

func TestLooseningHasALimitToo(t *testing.T) {
	_, t2 := exampleT2(t)
	l := newLens(t2)
	if got := l.reading(pairing.Reading{Value: -60, Status: protocol.Good}); got.Value != 60 {
		t.Errorf("60 N m of loosening read as %g", got.Value)
	}
}
