package simrig

import (
	"math"
	"testing"
)

// riseOf is the part of a trace up to its highest pressure.
func riseOf(trace []Moment) []Moment {
	top := 0
	for i, m := range trace {
		if m.PressurePa > trace[top].PressurePa {
			top = i
		}
	}
	return trace[:top+1]
}

// T-1 with QW-6: the mill ramps to 860 psi at 8 psi/s, from where the band is
// slack, after one exercise cycle to half of the target, three times.
func TestDefaultDriveOfT1(t *testing.T) {
	c := t1(t)
	c.Drive = Drive{}
	r := mustNew(t, c)
	d := r.conf.Drive
	near(t, "top, psi", d.TopPa/psiPa, 860, 1e-6)
	near(t, "rate, psi/s", d.RatePaS/psiPa, 8, 1e-6)
	near(t, "exercise, psi", d.ExercisePa/psiPa, r.Truth().RisingPa(4750*psiPa)/psiPa, 1e-6)
	near(t, "low end, psi", d.LowPa/psiPa, 0.6*58.375, 0.1)
	driver := r.conf.driver
	var tops []float64
	for i := 1; i+1 < len(driver.legs); i++ {
		if l := driver.legs[i]; l.waitS == 0 && l.to > d.LowPa {
			tops = append(tops, l.to)
		}
	}
	if len(tops) != 4 || tops[0] != d.ExercisePa || tops[1] != d.TopPa || tops[3] != d.TopPa {
		t.Errorf("cycles to %v Pa, want one to %g and three to %g", tops, d.ExercisePa, d.TopPa)
	}
}

func TestSmoothDriveKeepsItsRateUpAndDown(t *testing.T) {
	r, trace := mustTrace(t, quick(t))
	rate := r.conf.Drive.RatePaS
	up, down := 0, 0
	for i := 1; i < len(trace); i++ {
		a, b := trace[i-1], trace[i]
		if a.TravelM < 1e-4 || b.TravelM < 1e-4 {
			continue
		}
		switch got := (b.PressurePa - a.PressurePa) / 0.05; {
		case math.Abs(got-rate) < 1e-3*rate:
			up++
		case math.Abs(got+rate) < 1e-3*rate:
			down++
		}
	}
	// 750 psi at 20 psi/s in each direction, looked at 20 times a second.
	if up < 700 || down < 700 {
		t.Errorf("kept the rate at %d moments rising and %d falling", up, down)
	}
}

func TestNoDriveGoesPastItsTop(t *testing.T) {
	if testing.Short() {
		t.Skip("three whole drives")
	}
	for _, shape := range []Shape{Smooth, Strokes, Stairs} {
		c := quick(t)
		c.Drive.Shape, c.Drive.SagPart, c.Drive.StepHoldS = shape, 0.03, 0.5
		r, trace := mustTrace(t, c)
		highest := trace[0].PressurePa
		for _, m := range trace {
			highest = max(highest, m.PressurePa)
		}
		near(t, string(shape)+": top, psi", highest/psiPa, r.conf.Drive.TopPa/psiPa, 0.01)
		near(t, string(shape)+": end, psi", trace[len(trace)-1].PressurePa/psiPa, r.conf.Drive.LowPa/psiPa, 0.01)
	}
}

func TestStrokesOfAHandPump(t *testing.T) {
	c := t1(t)
	c.Drive.Shape, c.Drive.SagPart = Strokes, 0.01
	c.SlackM, c.SlackTimeS = 1e-3, 1
	r, trace := mustTrace(t, c)
	t.Run("pressure sags while the band holds", func(t *testing.T) { checkSags(t, trace) })
	t.Run("they reach the same branch", func(t *testing.T) { checkSameBranch(t, r, trace) })
}

func checkSags(t *testing.T, trace []Moment) {
	rise := riseOf(trace)
	sags := 0
	for i := 0; i < len(rise); i++ {
		top := i
		for i+1 < len(rise) && rise[i+1].PressurePa < rise[i].PressurePa {
			i++
		}
		before, after := rise[top], rise[i]
		if before.PressurePa < 200*psiPa || i == top {
			continue
		}
		sags++
		near(t, "part of the pressure lost", 1-after.PressurePa/before.PressurePa, 0.01, 0.0005)
		if lost := 1 - after.PullN/before.PullN; lost > 0.001 {
			t.Errorf("at %.0f psi the band lost %.4f of its pull with the sag", before.PressurePa/psiPa, lost)
		}
	}
	if sags < 30 {
		t.Errorf("%d sags above 200 psi, want one every 16 psi", sags)
	}
}

// The settings at which the pull first passes a stress are the same with
// strokes as with a smooth ramp; 0.5 % is what the analysis is asked for.
func checkSameBranch(t *testing.T, r *Rig, trace []Moment) {
	for _, stressPsi := range []float64{2000, 6000, 9500, 11000} {
		up := crossings(trace, r.Truth().PullN(stressPsi*psiPa), true)
		near(t, "rising psi", up[0]/psiPa, r.Truth().RisingPa(stressPsi*psiPa)/psiPa, 0.005*up[0]/psiPa)
	}
}

func TestStairsHoldOnEachStep(t *testing.T) {
	c := quick(t)
	c.Drive.Shape, c.Drive.Steps, c.Drive.StepHoldS = Stairs, 5, 3
	_, trace := mustTrace(t, c)
	holds, still := map[int]float64{}, 0
	for i := 1; i < len(trace); i++ {
		if math.Abs(trace[i].PressurePa-trace[i-1].PressurePa) < 1 {
			still++
			continue
		}
		if still > 40 {
			holds[int(math.Round(trace[i-1].PressurePa/psiPa))] += float64(still) * 0.05
		}
		still = 0
	}
	// Four steps between 35 and 860 psi, each held once rising and once falling.
	for _, level := range []int{200, 365, 530, 695} {
		near(t, "hold, s", holds[level], 6, 0.3)
	}
}

func TestStillNeverMoves(t *testing.T) {
	c := t1(t)
	c.Drive.Shape = Still
	d := mustNew(t, c).conf.driver
	for _, s := range []float64{0, 5, 100, 1e6} {
		if now, _ := d.next(seen{hand: 1e5}, s); !now.hold || d.over() {
			t.Errorf("after %g s %+v, over %t", s, now, d.over())
		}
	}
}

// A ragged hand goes back and forth and still gets to the top.
func TestRaggedHandGetsThere(t *testing.T) {
	c := quick(t)
	c.Drive.Ragged = 2
	r, trace := mustTrace(t, c)
	rise, back := riseOf(trace), 0
	for i := 1; i < len(rise); i++ {
		if rise[i].PressurePa < rise[i-1].PressurePa-50 {
			back++
		}
	}
	near(t, "top, psi", rise[len(rise)-1].PressurePa/psiPa, r.conf.Drive.TopPa/psiPa, 0.02)
	if back < 50 {
		t.Errorf("went back at %d of %d moments", back, len(rise))
	}
}
