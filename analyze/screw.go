package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Screw is what the loop says of the screw of a tensioner set by torque. All of
// it is at the working setting where it depends on the load: the target's where
// that was captured, else the highest. Torques are in N m.
type Screw struct {
	PullN        estimate.Estimate // wheel pull there
	LeadNm       estimate.Estimate // share of the raising torque that lifts: half of raising less loosening
	FrictionNm   estimate.Estimate // share that friction takes: half of their sum, rest torque in it
	RestNm       estimate.Estimate // T0, that the screw takes without a load; a wrong zero leaves it as it is
	RaisePerN    estimate.Estimate // raising torque for each newton of wheel pull, T0 left out
	LoosenPerN   estimate.Estimate // loosening torque likewise; below nothing where the screw does not lock itself
	RaisePerPa   estimate.Estimate // raising torque for each pascal of band stress; no section enters
	LoosenPerPa  estimate.Estimate
	ThreadMu     estimate.Estimate // apparent friction of the thread
	LeadRatio    estimate.Estimate // lead that the loop shows / lead given
	Efficiency   estimate.Estimate // F l / (2 pi T_up)
	Expected     estimate.Estimate // the same with the frictions that the profile expects
	EffOfExpect  estimate.Estimate // Efficiency / Expected
	Opposed      bool              // it was loosened by a torque of the other sense: it locks itself
	CollarNotice string            // what the collar was taken for
}

// The collar's friction is only expected, never seen apart from the thread's:
// its standard uncertainty is taken for as much as itself. Judgement: a dry one
// has two to three times the friction of a greased one.
const collarDoubt = 1.0

// torques is one ramp as torque on wheel pull, each counted in its own sense.
type torques struct{ up, down, aUp, aDown float64 }

func torquesOf(r ramp, k constants) torques {
	b := balanceOf(r, k)
	if !r.opposed { // the screw is held back while the load turns it
		b.kDown, b.aDown = -b.kDown, -b.aDown
	}
	return torques{b.kUp, b.kDown, b.aUp, b.aDown}
}

// mean is half of both torques together, for each newton.
func (t torques) mean() float64 { return (t.up + t.down) / 2 }

// restNm is T0 of T_up = up S + T0, T_down = down S + T0, S = F + W: a wrong zero
// moves aUp and aDown in proportion to up and down, which leaves it as it is.
func (t torques) restNm() float64 { return (t.aDown*t.up - t.aUp*t.down) / (t.up - t.down) }

func noScrew(why string) Screw {
	no := estimate.Unknown(why)
	return Screw{PullN: no, LeadNm: no, FrictionNm: no, RestNm: no, RaisePerN: no, LoosenPerN: no, RaisePerPa: no, LoosenPerPa: no, ThreadMu: no, LeadRatio: no, Efficiency: no, Expected: no, EffOfExpect: no}
}

// screw works out the screw of a tensioner that is set by torque.
func (w *work) screw() {
	w.res.Screw = noScrew("worked out for tensioners set by torque only")
	if w.setup.Tensioner.SetBy != mill.SetByTorque {
		return
	}
	s := &w.res.Screw
	s.Opposed = w.opposed()
	of := func(g func(torques) float64) estimate.Estimate {
		return w.combine(func(r ramp, k constants) float64 { return g(torquesOf(anyZero(r), k)) }, "not a finite number")
	}
	s.RaisePerN = of(func(t torques) float64 { return t.up })
	s.LoosenPerN = of(func(t torques) float64 { return t.down })
	perPa := func(g func(torques) float64) estimate.Estimate {
		return w.combine(func(r ramp, k constants) float64 {
			return g(torquesOf(anyZero(r), k)) * k.pullPerM() / k.paPerM()
		}, "not a finite number")
	}
	s.RaisePerPa = perPa(func(t torques) float64 { return t.up })
	s.LoosenPerPa = perPa(func(t torques) float64 { return t.down })
	s.RestNm = of(torques.restNm)
	w.screwShares(s)
	if w.setup.Tensioner.Screw == nil {
		no := estimate.Unknown("the profile does not describe the screw")
		s.ThreadMu, s.LeadRatio, s.Efficiency, s.Expected, s.EffOfExpect = no, no, no, no, no
		return
	}
	law := expectedLaw(*w.setup.Tensioner.Screw)
	w.threadFriction(s, law)
	w.efficiency(s, law)
	w.gradeScrew(s)
}

// anyZero lets figures that no zero touches be worked out without one.
func anyZero(r ramp) ramp {
	if math.IsNaN(r.zeroM) {
		r.zeroM = r.rising.A
	}
	return r
}

// screwShares splits the raising torque at the working setting.
func (w *work) screwShares(s *Screw) {
	working := w.res.Working.RisingSI
	s.FrictionNm = w.res.Working.HalfSI
	some := w.reaching(Rising, at(working))
	s.LeadNm = some.combine(func(r ramp, k constants) float64 { return working - halfWidth(working)(r, k) }, "not a finite number")
	s.PullN = some.combine(pullFigure(working), noZero)
}

// pullFigure is the wheel pull at a rising setting.
func pullFigure(risingSI float64) figure {
	return func(r ramp, k constants) float64 { return (r.rising.A + r.rising.B*risingSI - r.zeroM) * k.pullPerM() }
}

// threadFriction is what the thread must have, the collar being as expected.
// Loads of the screw are those of the wheel over the travel ratio.
func (w *work) threadFriction(s *Screw, law ScrewLaw) {
	ratio := w.setup.Tensioner.Ratio()
	mu := func(collar float64) figure {
		l := law
		l.CollarMu *= collar
		return func(r ramp, k constants) float64 { return l.threadMu(torquesOf(anyZero(r), k).mean() * ratio) }
	}
	s.ThreadMu = w.combine(mu(1), "not a finite number")
	s.CollarNotice = "no friction of a collar is given: all of it is counted to the thread"
	if law.CollarMu*law.CollarM > 0 && s.ThreadMu.Known() {
		by := (w.meanOf(mu(1+collarDoubt)) - w.meanOf(mu(1-collarDoubt))) / 2
		s.ThreadMu.System = math.Hypot(s.ThreadMu.System, by)
		s.CollarNotice = fmt.Sprintf("the collar's is taken for %g at %s, give or take as much", law.CollarMu, w.setup.Tensioner.Screw.CollarRadius)
	}
	s.LeadRatio = w.combine(func(r ramp, k constants) float64 {
		t, l := torquesOf(anyZero(r), k), law
		l.ThreadMu = l.threadMu(t.mean() * ratio)
		return (t.up - t.down) / 2 * ratio / l.leadShare()
	}, "not a finite number")
}

// meanOf is a figure as the mean of the ramps.
func (w *work) meanOf(f figure) float64 {
	values := make([]float64, len(w.ramps))
	for i, r := range w.ramps {
		values[i] = f(r, w.k)
	}
	mean, _ := estimate.Mean(values)
	return mean
}

// efficiency is at the working setting, beside what the expected frictions give
// there; the rest torque is the one that was found.
func (w *work) efficiency(s *Screw, law ScrewLaw) {
	working, ratio := w.res.Working.RisingSI, w.setup.Tensioner.Ratio()
	some := w.reaching(Rising, at(working))
	work := law.LeadM / (2 * math.Pi * ratio)
	s.Efficiency = some.combine(func(r ramp, k constants) float64 { return pullFigure(working)(r, k) * work / working }, noZero)
	if law.ThreadMu == 0 {
		s.Expected = estimate.Unknown("the profile gives no expected friction of the thread")
		s.EffOfExpect = s.Expected
		return
	}
	expected := func(r ramp, k constants) float64 {
		l := law
		l.RestNm = torquesOf(anyZero(r), k).restNm()
		return l.Efficiency(pullFigure(working)(r, k) / ratio)
	}
	s.Expected = some.combine(expected, noZero)
	s.EffOfExpect = some.combine(func(r ramp, k constants) float64 {
		return pullFigure(working)(r, k) * work / working / expected(r, k)
	}, noZero)
}

// A screw that asks for 20 % more torque than expected wants service, up to 10 %
// more is good. The first is common practice for a torque against the last
// visit's; the second is judgement.
const (
	screwGood    = 1 / 1.1
	screwService = 1 / 1.2
)

// gradeScrew judges a screw by its efficiency: half of the loop's width is
// friction even where all is well.
func (w *work) gradeScrew(s *Screw) {
	lo, hi := s.EffOfExpect.Interval95()
	low, high := screwGradeOf(lo), screwGradeOf(hi)
	switch {
	case low == high:
		w.res.Grade = low
	case !s.EffOfExpect.Known():
		w.warn("no-grade", "The screw is not graded: "+s.EffOfExpect.Why+".")
	default:
		w.warn("no-grade", fmt.Sprintf("The efficiency of the screw is not known well enough to grade: it may be anything from %q to %q.", low, high))
	}
}

func screwGradeOf(share float64) Grade {
	switch {
	case math.IsNaN(share):
		return Inconclusive
	case share < screwService:
		return Service
	case share < screwGood:
		return Watch
	}
	return Good
}
