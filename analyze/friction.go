package analyze

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Friction is the tensioner's, after p A* = S(1 +/- mu) +/- F0, S = F + W.
type Friction struct {
	F0N       estimate.Estimate // constant part, zero-immune formula
	Mu        estimate.Estimate // proportional part
	WeightN   estimate.Estimate // W, only as good as the zero
	AreaM2    estimate.Estimate // A*
	AreaRatio estimate.Estimate // A* / geometry's
	F0MuWN    estimate.Estimate // F0 + mu W, only together with its zero
	F0Budget  []Term            // of F0N, in newtons
}

// balance is one ramp as setting on wheel pull, p = k F + a, both ways.
type balance struct{ kUp, kDown, aUp, aDown float64 }

func balanceOf(r ramp, k constants) balance {
	n := k.pullPerM()
	return balance{
		kUp: 1 / (r.rising.B * n), kDown: 1 / (r.falling.B * n),
		aUp:   (r.zeroM - r.rising.A) / r.rising.B,
		aDown: (r.zeroM - r.falling.A) / r.falling.B,
	}
}

// mu = (k_up - k_dn) / (k_up + k_dn).
func (b balance) mu() float64 { return (b.kUp - b.kDown) / (b.kUp + b.kDown) }

// areaM2 is A* = 2 / (k_up + k_dn).
func (b balance) areaM2() float64 { return 2 / (b.kUp + b.kDown) }

// weightN is W = A* (a_up + a_dn) / 2.
func (b balance) weightN() float64 { return b.areaM2() * (b.aUp + b.aDown) / 2 }

// f0MuWN is F0 + mu W = A* (a_up - a_dn) / 2.
func (b balance) f0MuWN() float64 { return b.areaM2() * (b.aUp - b.aDown) / 2 }

// f0N is F0 = A* [(a_up - a_dn)/2 - mu (a_up + a_dn)/2]: a wrong zero moves
// a_up and a_dn in proportion to k_up and k_dn, which leaves it as it is.
func (b balance) f0N() float64 { return b.f0MuWN() - b.mu()*b.weightN() }

// friction works out the force balance of a tensioner set by pressure, or by
// the length of its springs.
func (w *work) friction() {
	f := &w.res.Friction
	by := w.setup.Tensioner.SetBy
	if by != mill.SetByPressure && by != mill.SetBySpring && by != "" {
		no := estimate.Unknown("worked out for tensioners set by pressure or spring length only")
		f.F0N, f.Mu, f.WeightN, f.AreaM2, f.AreaRatio, f.F0MuWN = no, no, no, no, no, no
		return
	}
	of := func(g func(balance) float64) figure {
		return func(r ramp, k constants) float64 { return g(balanceOf(r, k)) }
	}
	f.Mu = w.combine(of(balance.mu), "not a finite number")
	f.AreaM2 = w.combine(of(balance.areaM2), "not a finite number")
	f.WeightN = w.combine(of(balance.weightN), noZero)
	f.F0MuWN = w.combine(of(balance.f0MuWN), noZero)
	f0 := func(r ramp, k constants) float64 {
		if math.IsNaN(r.zeroM) { // any extension serves
			r.zeroM = r.rising.A
		}
		return balanceOf(r, k).f0N()
	}
	f.F0N = w.combine(f0, "not a finite number")
	f.F0Budget = w.ownTerms(f.F0N, f0)
	if by == mill.SetBySpring { // A* is then a rate: see springs
		f.AreaM2 = estimate.Unknown("set by spring length")
	}
	f.AreaRatio = estimate.Unknown("the cylinders' bore is not given")
	if w.setup.GeometryM2 > 0 {
		f.AreaRatio = f.AreaM2.Scale(1 / w.setup.GeometryM2)
	}
}
