package simrig

import (
	"errors"
	"fmt"
	"io"
	"math"
	"testing"

	"tautramp/protocol"
)

// Samples are what the wire carries: every count, status and tick.
func TestSamplesAreThoseOfTheLog(t *testing.T) {
	c := quick(t)
	c.Thermometer, c.RigThermometer, c.Second = true, true, SecondSpan
	c.Indicator.AbsentAtS, c.Indicator.AbsentForS = 20, 3
	r := mustNew(t, c)
	samples, err := r.Samples()
	if err != nil {
		t.Fatal(err)
	}
	list := records(t, logOf(t, c))
	start, n := list[0].(protocol.Here).Up, make([]int, len(samples))
	for _, v := range only[protocol.Val](list) {
		i := int(v.Channel - 'a')
		s := samples[i].Samples[n[i]]
		n[i]++
		if s.Count != v.Count || s.Status != v.Status || math.Abs(s.T-float64(v.Tick-start)*1e-6) > 1e-9 {
			t.Fatalf("channel %c at %g s: %+v, on the wire %+v", v.Channel, s.T, s, v)
		}
	}
	for i, s := range samples {
		if s.Spec != only[protocol.Chan](list)[i] || n[i] != len(s.Samples) || n[i] < 50 {
			t.Errorf("channel %c: %d on the wire, %d samples; %+v", s.Spec.ID, n[i], len(s.Samples), s.Spec)
		}
	}
}

func TestSamplesOfTwoBoardsAndOfNoEnd(t *testing.T) {
	c := quick(t)
	c.Boards = []BoardSpec{{}, {TickPPM: 300}}
	samples, err := mustNew(t, c).Samples()
	if err != nil || len(samples) != 2 || samples[1].Board != 1 || samples[1].Spec.Quantity != protocol.Extension {
		t.Errorf("%d channels, %v", len(samples), err)
	}
	c.Drive.Shape = Still
	if _, err := mustNew(t, c).Samples(); !errors.Is(err, ErrConfig) {
		t.Errorf("still: %v", err)
	}
}

// traceBy is the trace of a drive by steps of a length.
func traceBy(r *Rig, stepS float64) []Moment {
	w := newWorld(r.conf)
	w.stepS = stepS
	trace, _ := w.trace(0.05)
	return trace
}

// A hand pump that squeezes air by less with a stroke than leaks back after it
// never gets to its top.
func TestDriveThatNeverEndsIsRefused(t *testing.T) {
	c := quick(t)
	c.Drive.Shape, c.Drive.SagPart, c.Oil.AirM3 = Strokes, 0.05, 5e-3
	c.Drive.MostS = 600
	r := mustNew(t, c)
	if _, err := r.Samples(); !errors.Is(err, ErrNoEnd) {
		t.Errorf("samples: %v", err)
	}
	if _, err := r.Trace(1); !errors.Is(err, ErrNoEnd) {
		t.Errorf("trace: %v", err)
	}
	if err := r.WriteLog(io.Discard); !errors.Is(err, ErrNoEnd) {
		t.Errorf("log: %v", err)
	}
	if err := Plant(&c, Fault{Kind: MountSlip, Size: 1e-5}); !errors.Is(err, ErrNoEnd) {
		t.Errorf("planting: %v", err)
	}
}

// The long steps are as good as forty times shorter ones: the same settings at
// the same pulls.
func TestLongStepsAreAsGoodAsShortOnes(t *testing.T) {
	for _, shape := range []Shape{Smooth, Strokes, Stairs} {
		for _, kind := range []LawKind{Dahl, LuGre, PrandtlIshlinskii} {
			if testing.Short() && (shape == Stairs || kind != Dahl) {
				continue
			}
			c := t1(t)
			c.Drive.Shape, c.Law.Kind = shape, kind
			r := mustNew(t, c)
			long, short := traceBy(r, longStepS), traceBy(r, leastStepS)
			// Where in a stroke the pull passes is by chance, and with it the friction of a
			// law that minds the speed.
			within := 3e-4
			if shape == Strokes {
				within = 1e-3
				if kind == Stribeck || kind == LuGre {
					within = 7e-3
				}
			}
			for _, stress := range []float64{10e6, 40e6, 65.5e6, 75e6} {
				for _, rising := range []bool{true, false} {
					a, b := crossings(long, r.Truth().PullN(stress), rising), crossings(short, r.Truth().PullN(stress), rising)
					if len(a) == 0 || len(b) == 0 {
						t.Fatalf("%s, %s: %.0f MPa never crossed", shape, kind, stress/1e6)
					}
					near(t, fmt.Sprintf("%s, %s, %.0f MPa, rising %t: psi", shape, kind, stress/1e6, rising), a[0]/psiPa, b[0]/psiPa, within*b[0]/psiPa)
				}
			}
		}
	}
}
