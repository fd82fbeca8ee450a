package station

import (
	"math"

	"tautramp/analyze/gauge"
)

// turn is what happened where the reference turned at the top of a series.
type turn struct {
	target   gauge.Target
	reversal gauge.Reversal
}

// All figures are judgement.
const (
	stillTimes = 4.0 // of the scatter at rest: less is no movement
	lagS       = 0.2 // by which one instrument may follow later than the other
)

// watchTurn looks, where both instruments are read, at how far the reference
// goes back from the top before the tested one follows: once it is halfway to
// the next point.
func (b *Bench) watchTurn(s step, x float64) {
	top := b.plan.Points[len(b.plan.Points)-1].SI
	first := s.target.Direction == gauge.Down && s.from == top
	if b.turned || !first || b.roles.reference == nil || b.roles.tested == nil || top-x < s.near/2 {
		return
	}
	b.turned = true
	if r, ok := b.turnSince(b.begunAt); ok {
		b.turns = append(b.turns, turn{s.target, r})
	}
}

// turnSince is the turn after a rest that ended at t or later. ok is false where
// it was no rest, where the reference had already gone back before it, or where
// the readings no longer reach back.
func (b *Bench) turnSince(t float64) (r gauge.Reversal, ok bool) {
	lead, tested := b.trails[*b.roles.reference], b.trails[*b.roles.tested]
	from := t - b.plan.WindowS
	if tested == nil || !lead.reaches(from) || !tested.reaches(from) {
		return r, false
	}
	reference, indicated := lead.level(from, t, false), tested.level(from, t, false)
	rest := gauge.Sample{T: t, ReferenceSI: reference.SI, IndicatedSI: indicated.SI}
	still := stillTimes*indicated.Spread + b.count(b.roles.tested)
	if lead.swing(from, t) > b.plan.Steady*b.plan.SpanSI() || lead.highest() > rest.ReferenceSI+still {
		return r, false
	}
	var trace []gauge.Sample
	for i := tested.since(t); i < len(tested.t); i++ {
		if at := lead.between(tested.t[i]); !math.IsNaN(at) {
			trace = append(trace, gauge.Sample{T: tested.t[i], ReferenceSI: at, IndicatedSI: tested.v[i]})
		}
	}
	r, ok = gauge.ReversalFrom(rest, trace, true, still)
	r.DoubtSI = math.Hypot(r.DoubtSI, lagS*lead.speed())
	return r, ok
}

func (b *Bench) reversals() []gauge.Reversal {
	var all []gauge.Reversal
	for _, t := range b.turns {
		all = append(all, t.reversal)
	}
	return all
}
